"""Boilers of a case file in SI, what they do not state assumed and said so."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from evenfire.boiler import (
    actual_rating_kg_s,
    assumed_cold_start_s,
    assumed_purge_energy_j,
    assumed_ramp_kg_s2,
    assumed_stack_slope_per_k,
    assumed_standing_loss_w,
    assumed_water_content_m3,
    buffer_kg,
    cold_start_energy_j,
    fuel_curve,
    lowest_firing_efficiency_lhv,
)
from evenfire.case.assumptions import assumption
from evenfire.case.case import BoilerOffer
from evenfire.case.checks import net_efficiency
from evenfire.case.draft import boiler_place
from evenfire.case.schema import CaseFile
from evenfire.case.schema_boiler import BoilerType, RatedBoiler
from evenfire.case.schema_site import Fuel, Steam
from evenfire.errors import CaseError, EvenfireError, Notice, Problem
from evenfire.money.terms import Investment
from evenfire.plant import BoilerSpec, EfficiencyPoint
from evenfire.units import J_PER_KWH, PA_PER_BAR, bar_g_to_pa, degc_to_k, kg_h_to_kg_s

SECONDS_PER_MINUTE = 60.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumed:
    """A value that a boiler did not state, in the unit of its key."""

    key: str
    value: float
    unit: str
    reason: str


def boiler_offers(written: CaseFile) -> tuple[tuple[BoilerOffer, ...], tuple[Notice, ...]]:
    """Boilers in place, then the catalogue, each in file order, and what was assumed for them.

    Raises
    ------
    CaseError
        C129 where a boiler's values, each allowed, together leave the range of a formula.
    """
    offers = []
    notices: list[Notice] = []
    for boiler in written.existing_boiler:
        spec, assumed = _boiler(boiler.name, boiler, boiler, written)
        notices += (
            assumption(boiler_place(boiler.name), each.key, f"{each.value:.4g} {each.unit}", each.reason)
            for each in assumed
        )
        offers.append(
            BoilerOffer(
                spec=spec,
                existing=True,
                investment=None,
                maintenance_cost=boiler.maintenance_per_year,
                start_wear_cost=boiler.start_wear_cost,
            )
        )
    catalogue = written.new_boiler
    if catalogue is None:
        return tuple(offers), tuple(notices)
    assumed_by_name: dict[str, list[Assumed]] = {}
    for size in catalogue.sizes:
        name = f"New boiler, {size.rating_kg_h / 1000.0:g} t/h"
        spec, assumed_by_name[name] = _boiler(name, size, catalogue, written)
        offers.append(
            BoilerOffer(
                spec=spec,
                existing=False,
                investment=Investment(name=name, amount=size.installed_cost, life_years=catalogue.life_years),
                maintenance_cost=size.maintenance_per_year,
                start_wear_cost=catalogue.start_wear_cost,
            )
        )
    return tuple(offers), (*notices, *_catalogue_notices(assumed_by_name))


def _catalogue_notices(assumed_by_name: dict[str, list[Assumed]]) -> Iterator[Notice]:
    """One notice per key, with the value of each size."""
    by_key: dict[str, list[tuple[str, Assumed]]] = {}
    for name, assumed in assumed_by_name.items():
        for each in assumed:
            by_key.setdefault(each.key, []).append((name, each))
    for key, rows in by_key.items():
        values = [f"{each.value:.4g} {each.unit}" for _, each in rows]
        if len(set(values)) == 1:
            shown = values[0]
        else:
            shown = "; ".join(f"{value} for '{name}'" for value, (name, _) in zip(values, rows, strict=True))
        yield assumption("new_boiler", key, shown, rows[0][1].reason)


def _boiler(
    name: str, rated: RatedBoiler, kind: BoilerType, written: CaseFile
) -> tuple[BoilerSpec, list[Assumed]]:
    try:
        return _spec(name, rated, kind, written.steam, written.fuel)
    except EvenfireError as error:
        raise CaseError(
            *(
                Problem(
                    code="C129",
                    where=f"{boiler_place(name)}, {problem.where}",
                    found=problem.found,
                    allowed=problem.allowed,
                )
                for problem in error.problems
            )
        ) from error


def _spec(
    name: str, rated: RatedBoiler, kind: BoilerType, steam: Steam, fuel: Fuel
) -> tuple[BoilerSpec, list[Assumed]]:
    """The boiler in SI, and what was assumed of it."""
    assumed: list[Assumed] = []

    def stated_or(key: str, stated: float | None, value: float, unit: str, reason: str) -> float:
        if stated is not None:
            return stated
        assumed.append(Assumed(key=key, value=value, unit=unit, reason=reason))
        return value

    burner = fuel.kind != "electricity"
    working_pa = bar_g_to_pa(steam.boiler_pressure_bar_g)
    feedwater_k = degc_to_k(steam.feedwater_temperature_degc)
    rated_kg_s = kg_h_to_kg_s(rated.rating_kg_h)
    if kind.rating_basis == "from_and_at_100c":
        rated_kg_s = actual_rating_kg_s(rated_kg_s, working_pa, feedwater_k)
    water_content_m3 = stated_or(
        "water_content_m3",
        rated.water_content_m3,
        assumed_water_content_m3(rated_kg_s),
        "m3",
        "common practice for shell boilers, by rating",
    )
    bare = BoilerSpec(
        name=name,
        rated_kg_s=rated_kg_s,
        largest_working_pa=bar_g_to_pa(kind.design_pressure_bar_g),
        turndown=kind.turndown_ratio,
        efficiency_points=_efficiency_points(kind, fuel),
        efficiency_at_pa=bar_g_to_pa(
            stated_or(
                "efficiency_pressure_bar_g",
                kind.efficiency_pressure_bar_g,
                steam.boiler_pressure_bar_g,
                "bar g",
                "steam.boiler_pressure_bar_g",
            )
        ),
        standing_loss_w=1000.0
        * stated_or(
            "standing_loss_kw",
            rated.standing_loss_kw,
            assumed_standing_loss_w(rated_kg_s, working_pa) / 1000.0,
            "kW",
            "casing loss of a shell boiler, by rating",
        ),
        purge_energy_j=0.0,
        buffer_kg=buffer_kg(water_content_m3, working_pa, kind.burner_pressure_band_bar * PA_PER_BAR),
        minimum_firing_s=kind.minimum_firing_minutes * SECONDS_PER_MINUTE,
        minimum_off_s=kind.minimum_off_minutes * SECONDS_PER_MINUTE,
        cold_start_s=0.0,
        cold_start_energy_j=0.0,
        ramp_kg_s2=rated_kg_s
        * stated_or(
            "ramp_percent_per_minute",
            kind.ramp_percent_per_minute,
            assumed_ramp_kg_s2(rated_kg_s) / rated_kg_s * 100.0 * SECONDS_PER_MINUTE,
            "% of rating/min",
            "common practice",
        )
        / 100.0
        / SECONDS_PER_MINUTE,
        blowdown_fraction=steam.blowdown_percent / 100.0,
        stack_slope_per_k=stated_or(
            "stack_loss_percent_per_k",
            kind.stack_loss_percent_per_k,
            assumed_stack_slope_per_k(fuel.kind) * 100.0,
            "%/K",
            "Siegert formula at 3 % O2" if burner else "no stack",
        )
        / 100.0,
    )
    curve = fuel_curve(bare, working_pa, feedwater_k)
    purge_energy_kwh = stated_or(
        "purge_energy_kwh",
        rated.purge_energy_kwh,
        assumed_purge_energy_j(float(curve.fuel_w_lhv[-1])) / J_PER_KWH if burner else 0.0,
        "kWh/start",
        "60 s of full combustion air leaving at 150 degC" if burner else "no burner",
    )
    cold_start_fuel_j = J_PER_KWH * stated_or(
        "cold_start_fuel_kwh_lhv",
        rated.cold_start_fuel_kwh_lhv,
        cold_start_energy_j(water_content_m3, working_pa, lowest_firing_efficiency_lhv(bare, working_pa))
        / J_PER_KWH,
        "kWh/start",
        "heating water and steel from 20 degC at lowest firing",
    )
    cold_start_minutes = stated_or(
        "cold_start_minutes",
        kind.cold_start_minutes,
        assumed_cold_start_s(cold_start_fuel_j, float(curve.fuel_w_lhv[0])) / SECONDS_PER_MINUTE,
        "min",
        "that fuel burnt at lowest firing",
    )
    spec = replace(
        bare,
        purge_energy_j=purge_energy_kwh * J_PER_KWH,
        cold_start_s=cold_start_minutes * SECONDS_PER_MINUTE,
        cold_start_energy_j=cold_start_fuel_j,
    )
    return spec, assumed


def _efficiency_points(kind: BoilerType, fuel: Fuel) -> tuple[EfficiencyPoint, ...]:
    """The points on net calorific value, a first load typed with rounding put on the smallest firing load."""
    loads = [point.load_percent / 100.0 for point in kind.efficiency_points]
    loads[0] = min(loads[0], 1.0 / kind.turndown_ratio)
    return tuple(
        EfficiencyPoint(
            load_fraction=load,
            efficiency_lhv=net_efficiency(point.efficiency_percent, kind.calorific_basis, fuel),
        )
        for load, point in zip(loads, kind.efficiency_points, strict=True)
    )
