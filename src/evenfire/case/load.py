"""Reads a case from its file into SI, refusing what cannot be meant."""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Iterator, Mapping
from itertools import product
from pathlib import Path
from typing import Any

from evenfire.boiler import fuel_spec
from evenfire.case.assumptions import assumption, default_notices
from evenfire.case.boilers import boiler_offers
from evenfire.case.case import Case, PlanRequest, VesselOffer
from evenfire.case.change import changed_case
from evenfire.case.checks import draft_problems, lhv_to_hhv
from evenfire.case.draft import Draft, boiler_place, case_draft
from evenfire.case.schema import CaseFile
from evenfire.case.schema_money import Money, Plan
from evenfire.case.schema_site import Fuel, Record, Steam, Vessel
from evenfire.demand.read import RecordFormat
from evenfire.errors import CaseError, Notice, Problem
from evenfire.money.terms import Finance, Price, Prices
from evenfire.plant import FuelSpec, SteamConditions, VesselRules, WindowSpec
from evenfire.units import J_PER_KWH, J_PER_MWH, KG_PER_TONNE, PA_PER_BAR, bar_g_to_pa, degc_to_k

CASE_FILE = "case.toml"
LARGEST_CASE_BYTES = 5_000_000
J_PER_GJ = 1.0e9
WATER_KG_PER_M3 = 1000.0
SECONDS_PER_MINUTE = 60.0


def load_case(path: str | Path, changes: Mapping[str, float] | None = None) -> Case:
    """Case read from its folder or file, checked as a whole and converted to SI.

    Use it at the start of every run. The record itself is not read here, only found and hashed.

    Parameters
    ----------
    path : str or Path
        A folder with ``case.toml``, or the file itself.
    changes : Mapping[str, float], optional
        Numeric inputs to replace before the case is checked, by path and in the unit of the key:
        ``{"fuel.price_per_mwh": 60.0}``; see :func:`evenfire.case.change.changed_case`.

    Returns
    -------
    Case
        Everything in SI. What the case did not state and was assumed is in its notices.

    Raises
    ------
    CaseError
        Every problem of the file at once: C101 no such file, C102 not TOML, C103 unknown key, C104 missing
        key, C105 to C109 a value of the wrong kind, range, choice or form, C110 to C127 values that
        contradict each other, C123 a path that does not exist, C130 no record file.

    Examples
    --------
    >>> load_case("no/such/folder")
    Traceback (most recent call last):
        ...
    evenfire.errors.CaseError: no/such/folder: no such file or folder; give a case folder or its case.toml [C101]
    """
    file = _case_file(Path(path))
    content = _content(file)
    raw = _table(content, file)
    name = str(file)
    if changes:
        raw = changed_case(raw, changes, CaseFile, name)
    draft, problems = case_draft(raw, name)
    problems += draft_problems(draft)
    record_file, record_problems = _record_file(draft, file)
    problems += record_problems
    if problems:
        raise CaseError(*problems)
    return _case(draft, file, content, record_file)


def _case_file(path: Path) -> Path:
    if path.is_dir():
        path = path / CASE_FILE
    if not path.is_file():
        raise CaseError(
            Problem(
                code="C101",
                where=str(path),
                found="no such file or folder",
                allowed=f"give a case folder or its {CASE_FILE}",
            )
        )
    return path


def _content(file: Path) -> bytes:
    try:
        size = file.stat().st_size
        content = file.read_bytes() if size <= LARGEST_CASE_BYTES else b""
    except OSError as error:
        raise CaseError(
            Problem(
                code="C101",
                where=str(file),
                found=f"cannot be read ({error.strerror})",
                allowed="give a file that may be read",
            )
        ) from error
    if size > LARGEST_CASE_BYTES:
        raise CaseError(
            Problem(
                code="C102",
                where=str(file),
                found=f"found {size / 1e6:.0f} MB",
                allowed="a case file is a few kB of TOML; the record belongs in its own file",
            )
        )
    return content


def _table(content: bytes, file: Path) -> dict[str, Any]:
    try:
        return tomllib.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise CaseError(
            Problem(
                code="C102",
                where=f"{file}: line {line}",
                found="a byte that is not UTF-8",
                allowed="save the file as UTF-8 text",
            )
        ) from error
    except tomllib.TOMLDecodeError as error:
        place = re.search(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)$", str(error))
        where, words = str(file), str(error)
        if place is not None:
            words = words[: place.start()]
            where += f": line {place[1]}, column {place[2]}" if place[1] else ": end of file"
        raise CaseError(
            Problem(
                code="C102", where=where, found=f"not TOML: {words}", allowed="mend the line; see toml.io"
            )
        ) from error


def _record_file(draft: Draft, file: Path) -> tuple[Path, list[Problem]]:
    if draft.record is None:
        return file, []
    record_file = file.parent / draft.record.file
    if record_file.is_file():
        return record_file, []
    return record_file, [
        Problem(
            code="C130",
            where=f"{draft.file}: record.file",
            found=f"found '{draft.record.file}', but there is no file {record_file}",
            allowed="name a CSV file beside the case",
        )
    ]


def _case(draft: Draft, file: Path, content: bytes, record_file: Path) -> Case:
    assert draft.site is not None
    assert draft.record is not None
    assert draft.steam is not None
    assert draft.fuel is not None
    assert draft.money is not None
    assert draft.plan is not None
    steam, fuel = draft.steam, draft.fuel
    boilers, boiler_notices = boiler_offers(draft.existing_boilers, draft.new_boiler, steam, fuel, draft.file)
    return Case(
        folder=file.parent,
        name=draft.site.name,
        question=draft.site.question,
        record_file=record_file,
        record_format=_record_format(draft.record),
        conditions=_conditions(steam),
        fuel=_fuel(fuel),
        boilers=boilers,
        vessel=_vessel(draft.vessel, steam) if draft.vessel is not None else None,
        prices=_prices(draft.money, fuel),
        finance=_finance(draft.money),
        fan_power_w_per_kg_s=draft.money.fan_and_pump_kwh_per_t_steam * J_PER_KWH / KG_PER_TONNE,
        plan=_plan(draft.plan),
        notices=(*_notices(draft), *boiler_notices),
        fuel_price_basis=fuel.calorific_basis,
        input_hashes=(
            (file.name, hashlib.sha256(content).hexdigest()),
            (record_file.name, hashlib.sha256(record_file.read_bytes()).hexdigest()),
        ),
    )


def _record_format(record: Record) -> RecordFormat:
    return RecordFormat(
        time_column=record.time_column,
        flow_column=record.flow_column,
        flow_unit=record.flow_unit,
        gaps=record.gaps,
        largest_gap_s=(record.largest_gap_minutes or 0.0) * SECONDS_PER_MINUTE,
    )


def _conditions(steam: Steam) -> SteamConditions:
    return SteamConditions(
        process_pa=bar_g_to_pa(steam.process_pressure_bar_g),
        boiler_today_pa=bar_g_to_pa(steam.boiler_pressure_bar_g),
        feedwater_k=degc_to_k(steam.feedwater_temperature_degc),
        charging_drop_pa=steam.charging_pressure_drop_bar * PA_PER_BAR,
        discharging_drop_pa=steam.discharging_pressure_drop_bar * PA_PER_BAR,
        ambient_k=degc_to_k(steam.ambient_temperature_degc),
    )


def _fuel(fuel: Fuel) -> FuelSpec:
    published = fuel_spec(fuel.kind)
    stated = fuel.co2_kg_per_gj_lhv
    return FuelSpec(
        kind=fuel.kind,
        lhv_to_hhv=lhv_to_hhv(fuel),
        co2_kg_per_j_lhv=published.co2_kg_per_j_lhv if stated is None else stated / J_PER_GJ,
    )


def _windows(vessel: Vessel) -> tuple[tuple[WindowSpec, ...], list[str]]:
    """Every window that can exist, and in words the pairs that cannot."""
    windows, skipped = [], []
    for charged, discharged in product(vessel.charged_pressures_bar_g, vessel.discharged_pressures_bar_g):
        if charged > discharged:
            windows.append(WindowSpec(charged_pa=bar_g_to_pa(charged), discharged_pa=bar_g_to_pa(discharged)))
        else:
            skipped.append(f"{charged:g} to {discharged:g}")
    return tuple(windows), skipped


def _vessel(vessel: Vessel, steam: Steam) -> VesselOffer:
    make_up_degc = vessel.make_up_temperature_degc
    return VesselOffer(
        rules=VesselRules(
            charged_fill=vessel.charged_fill_percent / 100.0,
            length_to_diameter=vessel.length_to_diameter_ratio,
            release_kg_m2_h_per_bar=vessel.release_limit_kg_m2_h_per_bar,
            heat_loss_w_m2k=vessel.heat_loss_w_m2_k,
            make_up_k=degc_to_k(steam.feedwater_temperature_degc if make_up_degc is None else make_up_degc),
        ),
        windows=_windows(vessel)[0],
        smallest_m3=vessel.smallest_volume_m3,
        largest_m3=vessel.largest_volume_m3,
        reference_m3=vessel.reference_volume_m3,
        reference_pa=bar_g_to_pa(vessel.reference_design_pressure_bar_g),
        reference_cost=vessel.reference_installed_cost,
        volume_exponent=vessel.volume_exponent,
        pressure_cost_per_pa=vessel.cost_change_percent_per_bar / 100.0 / PA_PER_BAR,
        life_years=vessel.life_years,
        maintenance_cost=vessel.maintenance_per_year,
    )


def _prices(money: Money, fuel: Fuel) -> Prices:
    net_share = lhv_to_hhv(fuel) if fuel.calorific_basis == "hhv" else 1.0
    return Prices(
        fuel_per_j_lhv=_price(
            fuel.price_per_mwh, fuel.price_escalation_percent_per_year, J_PER_MWH * net_share
        ),
        carbon_per_kg=_price(fuel.carbon_price_per_t, fuel.carbon_escalation_percent_per_year, KG_PER_TONNE),
        electricity_per_j=_price(
            money.electricity_price_per_mwh, money.electricity_escalation_percent_per_year, J_PER_MWH
        ),
        water_per_kg=_price(
            money.water_price_per_m3, money.water_escalation_percent_per_year, WATER_KG_PER_M3
        ),
        unmet_steam_per_kg=_price(
            money.unmet_steam_price_per_t, money.unmet_steam_escalation_percent_per_year, KG_PER_TONNE
        ),
        maintenance=_price(1.0, money.maintenance_escalation_percent_per_year, 1.0),
    )


def _price(amount: float, escalation_percent: float, quantity: float) -> Price:
    return Price(amount=amount / quantity, escalation=escalation_percent / 100.0)


def _finance(money: Money) -> Finance:
    return Finance(
        currency=money.currency,
        price_date=money.price_date,
        horizon_years=money.horizon_years,
        discount_rate=money.discount_rate_percent / 100.0,
        rate_basis=money.rate_basis,
        contingency=money.contingency_percent / 100.0,
    )


def _plan(plan: Plan) -> PlanRequest:
    return PlanRequest(
        step_s=plan.step_minutes * SECONDS_PER_MINUTE,
        time_limit_s=plan.time_limit_seconds,
        gap=plan.gap_percent / 100.0,
        reference=plan.reference,
        alternatives=plan.alternatives,
        unmet_tolerance_kg_per_year=plan.unmet_steam_tolerance_t_per_year * KG_PER_TONNE,
    )


def _notices(draft: Draft) -> Iterator[Notice]:
    """What was assumed outside the boilers' own physics, and pairs of pressures that are no window."""
    named = {
        "steam": draft.steam,
        "fuel": draft.fuel,
        **{boiler_place(boiler.name): boiler for boiler in draft.existing_boilers},
        "new_boiler": draft.new_boiler,
        "vessel": draft.vessel,
        "money": draft.money,
        "plan": draft.plan,
    }
    yield from default_notices((place, section) for place, section in named.items() if section is not None)
    fuel = draft.fuel
    if fuel is not None and fuel.kind != "electricity":
        published = fuel_spec(fuel.kind)
        if fuel.lhv_to_hhv is None:
            yield assumption(
                "fuel", "lhv_to_hhv", f"{published.lhv_to_hhv:.4f}", f"published for {fuel.kind}"
            )
        if fuel.co2_kg_per_gj_lhv is None:
            co2 = published.co2_kg_per_j_lhv * J_PER_GJ
            yield assumption("fuel", "co2_kg_per_gj_lhv", f"{co2:.4g} kg/GJ", f"published for {fuel.kind}")
    if draft.vessel is None or draft.steam is None:
        return
    if draft.vessel.make_up_temperature_degc is None:
        feedwater = f"{draft.steam.feedwater_temperature_degc:g} degC"
        yield assumption("vessel", "make_up_temperature_degc", feedwater, "steam.feedwater_temperature_degc")
    skipped = _windows(draft.vessel)[1]
    if skipped:
        yield Notice(
            code="C191",
            text=f"vessel: no window {', '.join(skipped)} bar g, as charged is not above discharged",
        )
