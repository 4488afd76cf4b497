"""A catalogue of tiny plants for the plan's tests: round numbers, every option reachable."""

from __future__ import annotations

import numpy as np

from evenfire.plan.inputs import (
    AdequacyCut,
    AlternativeRules,
    PlanBoiler,
    PlanDay,
    PlanInputs,
    PlanMode,
    PlanRates,
    VesselSegment,
    VesselUse,
)


def boiler(
    name: str,
    rated: float,
    *,
    turndown: float = 4.0,
    existing: bool = True,
    fixed: float = 0.0,
    slope: float = 0.75,
    casing: float = 0.03,
    curvature: float = 0.05,
    standing: float = 0.02,
    start_wear: float = 0.05,
    start_fuel: float = 0.01,
    cold_start_fuel: float = 1.0,
    minimum_firing_steps: int = 1,
    minimum_off_steps: int = 1,
    ramp: float = 1e3,
    starts_peak: float = 5.0,
    pressures: int = 2,
    cycling_parts: int = 2,
    allowed: tuple[bool, ...] | None = None,
) -> PlanBoiler:
    """A boiler with a two-piece convex firing curve and a tent of burner starts below turndown."""
    low, middle = rated / turndown, rated * (1 + 1 / turndown) / 2
    fuel_low = casing + slope * low
    fuel_middle = fuel_low + slope * (middle - low)
    fuel_high = fuel_middle + slope * (1 + curvature) * (rated - middle)
    modes = []
    for part in range(cycling_parts):
        ends = [low * part / cycling_parts, low * (part + 1) / cycling_parts]
        starts = [starts_peak * 4 * (q / low) * (1 - q / low) for q in ends]
        fuel = [standing + (fuel_low - standing) * q / low for q in ends]
        modes.append(
            PlanMode(
                name="cycling",
                lit=ends[0] >= low / 2,
                output_t_h=tuple(ends),
                fuel_mwh_h=tuple(fuel),
                starts_per_h_low=starts[0],
                starts_per_h_high=starts[1],
            )
        )
    modes.append(
        PlanMode(
            name="firing",
            lit=True,
            output_t_h=(low, middle, rated),
            fuel_mwh_h=(fuel_low, fuel_middle, fuel_high),
            starts_per_h_low=0.0,
            starts_per_h_high=0.0,
        )
    )
    return PlanBoiler(
        name=name,
        existing=existing,
        rated_t_h=rated,
        modes=tuple(modes),
        fixed_cost_k=fixed,
        start_wear_k=start_wear,
        start_fuel_mwh=start_fuel,
        cold_start_fuel_mwh=cold_start_fuel,
        minimum_firing_steps=minimum_firing_steps,
        minimum_off_steps=minimum_off_steps,
        ramp_t_h=ramp,
        pressure_factor=tuple(1.0 + 0.004 * p for p in range(pressures)),
        pressure_allowed=allowed or (True,) * pressures,
    )


def segment(
    low: float,
    high: float,
    *,
    window: int = 0,
    pressure: int = 0,
    per_m3: float = 2.0,
    base: float = 20.0,
    capacity_per_m3: float = 0.05,
    release_per_m3: float = 0.6,
    loss_per_m3: float = 0.0002,
    credit: float = 0.004,
) -> VesselSegment:
    """A vessel segment whose properties are proportional to volume."""
    return VesselSegment(
        window=window,
        pressure=pressure,
        volume_m3=(low, high),
        fixed_cost_k=(base + per_m3 * low, base + per_m3 * high),
        capacity_t=(capacity_per_m3 * low, capacity_per_m3 * high),
        release_t_h=(release_per_m3 * low, release_per_m3 * high),
        loss_t_h=(loss_per_m3 * low, loss_per_m3 * high),
        charging_credit_mwh_t=credit,
    )


def site(
    demand: list[list[float]],
    boilers: list[PlanBoiler],
    *,
    segments: tuple[VesselSegment, ...] = (),
    step_h: float = 0.25,
    weights: list[float] | None = None,
    transitions: np.ndarray | None = None,
    pressures: int = 2,
    cuts: tuple[AdequacyCut, ...] = (),
    fuel: float = 0.4,
    steam: float = 0.02,
    unmet: float = 4.0,
) -> PlanInputs:
    """A site with the given demand per typical day [t/h]."""
    weights = weights or [300.0] * len(demand)
    return PlanInputs(
        step_h=step_h,
        days=tuple(
            PlanDay(name=f"day {d}", days_per_year=weights[d], demand_t_h=np.array(series, dtype=float))
            for d, series in enumerate(demand)
        ),
        transitions_per_year=np.zeros((len(demand), len(demand))) if transitions is None else transitions,
        boilers=tuple(boilers),
        pressures=pressures,
        vessel_segments=segments,
        vessel_maintenance_k=1.0,
        cuts=cuts,
        peak_t_h=max(max(series) for series in demand),
        rates=PlanRates(fuel_k_mwh=fuel, steam_k_t=steam, unmet_k_t=unmet),
    )


def rules(
    inputs: PlanInputs,
    name: str = "free choice",
    *,
    vessel: VesselUse = VesselUse.OPTIONAL,
    required: tuple[str, ...] = (),
    most_new: int = 1,
    fewest_new: int = 0,
    adequate: bool = False,
) -> AlternativeRules:
    """Rules that allow every boiler of the site."""
    return AlternativeRules(
        name=name,
        required=frozenset(required),
        allowed=frozenset(x.name for x in inputs.boilers),
        fewest_new=fewest_new,
        most_new=most_new,
        vessel=vessel,
        adequate=adequate,
    )
