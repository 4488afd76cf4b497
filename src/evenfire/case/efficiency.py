"""Efficiency points of a boiler of a case, typed or from stack readings, on net calorific value."""

from __future__ import annotations

from evenfire.boiler import (
    StackReading,
    assumed_standing_loss_w,
    check_points_against_stack,
    efficiency_points_from_stack,
    o2_from_co2_percent,
    steam_heat_j_kg,
    with_economiser,
)
from evenfire.case.assumptions import AssumedValues
from evenfire.case.fuel_basis import net_efficiency
from evenfire.case.schema_boiler import BoilerType, RatedBoiler
from evenfire.case.schema_site import Fuel, Steam
from evenfire.case.water_side import blowdown_fraction
from evenfire.plant import EfficiencyPoint
from evenfire.units import degc_to_k

ASSUMED_O2_PERCENT = 3.0


def efficiency_points(
    rated: RatedBoiler,
    kind: BoilerType,
    steam: Steam,
    fuel: Fuel,
    rated_kg_s: float,
    efficiency_pa: float,
    assumed: AssumedValues,
) -> tuple[EfficiencyPoint, ...]:
    """Points on net calorific value from the smallest continuous firing load (or below) to full load.

    Typed points are taken as they are, and refused where stack readings are typed too and allow less.
    Without typed points they follow from the stack readings, behind the economiser if there is one, and
    the casing loss.

    Parameters
    ----------
    rated, kind, steam, fuel
        Sections of the case.
    rated_kg_s : float
        Actual rated output [kg/s].
    efficiency_pa : float
        Absolute boiler pressure of the points or readings [Pa].
    assumed : AssumedValues
        Takes up what had to be assumed.

    Raises
    ------
    OutOfRangeError
        P110 for a typed efficiency above what the stack readings leave; P116 for oxygen or carbon dioxide
        that the fuel cannot give.
    """
    typed = _typed_points(kind, fuel)
    readings = stack_readings(kind, fuel)
    if not readings:
        return typed
    air_k = degc_to_k(
        assumed.stated_or(
            "combustion_air_temperature_degc",
            kind.combustion_air_temperature_degc,
            steam.ambient_temperature_degc,
            "degC",
            "steam.ambient_temperature_degc",
        )
    )
    if typed:
        check_points_against_stack(typed, fuel.kind, readings, air_k)
        return typed
    if kind.economiser is not None:
        water_degc = assumed.stated_or(
            "economiser.water_temperature_degc",
            kind.economiser.water_temperature_degc,
            steam.feedwater_temperature_degc,
            "degC",
            "steam.feedwater_temperature_degc",
        )
        effectiveness = kind.economiser.effectiveness_percent / 100.0
        readings = with_economiser(readings, degc_to_k(water_degc), effectiveness)
    casing_loss_kw = assumed.stated_or(
        "casing_loss_kw",
        rated.casing_loss_kw,
        assumed_standing_loss_w(rated_kg_s, efficiency_pa) / 1000.0,
        "kW",
        "casing loss of a shell boiler, by rating",
    )
    heat_j_kg = steam_heat_j_kg(
        efficiency_pa, degc_to_k(steam.feedwater_temperature_degc), blowdown_fraction(steam)
    )
    return efficiency_points_from_stack(
        fuel.kind, readings, air_k, rated_kg_s * heat_j_kg, casing_loss_kw * 1000.0
    )


def _typed_points(kind: BoilerType, fuel: Fuel) -> tuple[EfficiencyPoint, ...]:
    if kind.efficiency_points is None:
        return ()
    loads = _firing_loads(kind, [point.load_percent for point in kind.efficiency_points])
    return tuple(
        EfficiencyPoint(
            load_fraction=load,
            efficiency_lhv=net_efficiency(point.efficiency_percent, kind.calorific_basis, fuel),
        )
        for load, point in zip(loads, kind.efficiency_points, strict=True)
    )


def stack_readings(kind: BoilerType, fuel: Fuel) -> tuple[StackReading, ...]:
    """What the analyser read, ahead of an economiser yet to be added; empty where it read nothing."""
    if kind.stack_readings is None:
        return ()
    loads = _firing_loads(kind, [reading.load_percent for reading in kind.stack_readings])
    return tuple(
        StackReading(
            load_fraction=load,
            stack_k=degc_to_k(reading.stack_temperature_degc),
            o2_percent=reading.o2_percent
            if reading.o2_percent is not None
            else o2_from_co2_percent(fuel.kind, reading.co2_percent or 0.0),
        )
        for load, reading in zip(loads, kind.stack_readings, strict=True)
    )


def _firing_loads(kind: BoilerType, loads_percent: list[float]) -> list[float]:
    """Typed loads as fractions, the first one put on the smallest firing load where rounding put it above."""
    loads = [load / 100.0 for load in loads_percent]
    return [min(loads[0], 1.0 / kind.turndown_ratio), *loads[1:]]
