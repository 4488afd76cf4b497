"""The boilers of a case, in place and on offer, and what was assumed for them."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from evenfire.case.assumptions import Assumed, assumption
from evenfire.case.boiler_spec import boiler_spec
from evenfire.case.case import BoilerOffer
from evenfire.case.draft import boiler_place, new_boiler_name
from evenfire.case.schema import CaseFile
from evenfire.case.schema_boiler import BoilerType, RatedBoiler
from evenfire.errors import CaseError, EvenfireError, Notice, Problem
from evenfire.money.terms import Investment
from evenfire.plant import BoilerSpec


def boiler_offers(written: CaseFile, file: str) -> tuple[tuple[BoilerOffer, ...], tuple[Notice, ...]]:
    """Boilers in place, then the catalogue, each in file order, and what was assumed for them.

    Raises
    ------
    CaseError
        C129 where a boiler's values, each allowed, together leave the range of a formula.
    """
    rows: list[tuple[str, RatedBoiler, BoilerType]] = [
        (boiler.name, boiler, boiler) for boiler in written.existing_boiler
    ]
    catalogue = written.new_boiler
    if catalogue is not None:
        rows += [(new_boiler_name(size.rating_kg_h), size, catalogue) for size in catalogue.sizes]
    specs: list[BoilerSpec] = []
    assumed: list[tuple[str, tuple[Assumed, ...]]] = []
    problems: list[Problem] = []
    for name, rated, kind in rows:
        try:
            spec, assumed_here = boiler_spec(name, rated, kind, written.steam, written.fuel)
        except EvenfireError as error:
            problems += _named(error, file, name)
            continue
        specs.append(spec)
        assumed.append((name, assumed_here))
    if problems:
        raise CaseError(*problems)
    in_place = len(written.existing_boiler)
    notices = (*_notices(assumed[:in_place]), *_catalogue_notices(assumed[in_place:]))
    return (*_in_place(written, specs[:in_place]), *_on_offer(written, specs[in_place:])), notices


def _in_place(written: CaseFile, specs: Sequence[BoilerSpec]) -> Iterator[BoilerOffer]:
    for boiler, spec in zip(written.existing_boiler, specs, strict=True):
        yield BoilerOffer(
            spec=spec,
            existing=True,
            investment=None,
            maintenance_cost=boiler.maintenance_per_year,
            start_wear_cost=boiler.start_wear_cost,
        )


def _on_offer(written: CaseFile, specs: Sequence[BoilerSpec]) -> Iterator[BoilerOffer]:
    catalogue = written.new_boiler
    if catalogue is None:
        return
    for size, spec in zip(catalogue.sizes, specs, strict=True):
        yield BoilerOffer(
            spec=spec,
            existing=False,
            investment=Investment(
                name=spec.name, amount=size.installed_cost, life_years=catalogue.life_years
            ),
            maintenance_cost=size.maintenance_per_year,
            start_wear_cost=catalogue.start_wear_cost,
        )


def _named(error: EvenfireError, file: str, name: str) -> Iterator[Problem]:
    """The problems of a formula with the boiler they belong to."""
    for problem in error.problems:
        place = problem.where.removeprefix(boiler_place(name)).removeprefix(",").strip()
        yield Problem(
            code="C129",
            where=f"{file}: {boiler_place(name)}, {place}",
            found=problem.found,
            allowed=problem.allowed,
        )


def _notices(assumed: Sequence[tuple[str, tuple[Assumed, ...]]]) -> Iterator[Notice]:
    for name, values in assumed:
        for each in values:
            yield assumption(boiler_place(name), each.key, each.shown, each.reason)


def _catalogue_notices(assumed: Sequence[tuple[str, tuple[Assumed, ...]]]) -> Iterator[Notice]:
    """One notice per key, with the value of each size where they differ."""
    by_key: dict[str, list[tuple[str, Assumed]]] = {}
    for name, values in assumed:
        for each in values:
            by_key.setdefault(each.key, []).append((name, each))
    for key, rows in by_key.items():
        values_shown = {each.shown for _, each in rows}
        shown = "; ".join(f"{each.shown} for '{name}'" for name, each in rows)
        yield assumption(
            "new_boiler", key, shown if len(values_shown) > 1 else values_shown.pop(), rows[0][1].reason
        )
