"""What a plan uses in a year, by boiler and by purpose: the quantities that money and the report price."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.plan.inputs import PlanBoiler, PlanInputs
from evenfire.plan.outcome import Plan

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerFlows:
    """One boiler's year."""

    name: str
    steam_t: float
    firing_fuel_mwh: float
    """Net, at today's boiler pressure."""
    cycling_fuel_mwh: float
    """Burnt below turndown while the burner fires, without the fuel of starts."""
    standing_fuel_mwh: float
    """Makes good the standing loss while the hot boiler does not fire: hot standby, pauses of cycling."""
    start_fuel_mwh: float
    """Heat carried off by purging."""
    cold_start_fuel_mwh: float
    pressure_fuel_mwh: float
    """What the plan's boiler pressure adds to all of these."""
    burner_starts: float
    firing_hours: float
    """Hours with a burning burner, cycling counted by its share of time."""

    @property
    def fuel_mwh(self) -> float:
        """All fuel of the boiler, net [MWh/a]."""
        return (
            self.firing_fuel_mwh
            + self.cycling_fuel_mwh
            + self.standing_fuel_mwh
            + self.start_fuel_mwh
            + self.cold_start_fuel_mwh
            + self.pressure_fuel_mwh
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class YearlyFlows:
    """A plan's year."""

    boilers: tuple[BoilerFlows, ...]
    vessel_credit_mwh: float
    """Fuel saved because the vessel gives back more steam than it takes up, net."""
    charged_t: float
    vessel_loss_t: float
    """Standing loss of the vessel as steam that boilers make up."""
    unmet_t: float
    vented_t: float
    demand_t: float

    @property
    def fuel_mwh(self) -> float:
        """All fuel, net [MWh/a]."""
        return sum(boiler.fuel_mwh for boiler in self.boilers) - self.vessel_credit_mwh


def yearly_flows(inputs: PlanInputs, plan: Plan) -> YearlyFlows:
    """Quantities of one year of a plan.

    Parameters
    ----------
    inputs : PlanInputs
    plan : Plan

    Returns
    -------
    YearlyFlows
        Typical days times their days a year, cold starts between days included.
    """
    segment = None if plan.segment is None else inputs.vessel_segments[plan.segment]
    pressure = 0 if segment is None else segment.pressure
    weights = [day.days_per_year * inputs.step_h for day in inputs.days]
    charged = sum(w * float(day.charge_t_h.sum()) for w, day in zip(weights, plan.dispatch, strict=True))
    discharged = sum(
        w * float(day.discharge_t_h.sum()) for w, day in zip(weights, plan.dispatch, strict=True)
    )
    return YearlyFlows(
        boilers=tuple(
            _boiler_flows(inputs, plan, row, inputs.boiler(name), pressure)
            for row, name in enumerate(plan.boilers)
        ),
        vessel_credit_mwh=0.0 if segment is None else segment.charging_credit_mwh_t * charged,
        charged_t=charged,
        vessel_loss_t=charged - discharged,
        unmet_t=sum(w * float(day.unmet_t_h.sum()) for w, day in zip(weights, plan.dispatch, strict=True)),
        vented_t=sum(w * float(day.vented_t_h.sum()) for w, day in zip(weights, plan.dispatch, strict=True)),
        demand_t=sum(w * float(day.demand_t_h.sum()) for w, day in zip(weights, inputs.days, strict=True)),
    )


def _boiler_flows(inputs: PlanInputs, plan: Plan, row: int, boiler: PlanBoiler, pressure: int) -> BoilerFlows:
    steam = firing = below = standing = starts = hours = 0.0
    lowest = min(mode.output_t_h[0] for mode in boiler.modes if mode.name == "firing")
    standing_mwh_h = standing_fuel_mwh_h(boiler)
    for day, dispatch in zip(inputs.days, plan.dispatch, strict=True):
        weight = day.days_per_year * inputs.step_h
        starts += day.days_per_year * int(dispatch.start[row].sum())
        for k, mode in enumerate(boiler.modes):
            made = dispatch.output_t_h[row, dispatch.mode[row] == k]
            steam += weight * float(made.sum())
            fuel = weight * float(np.interp(made, mode.output_t_h, mode.fuel_mwh_h).sum())
            if mode.name == "firing":
                firing += fuel
                hours += weight * len(made)
            else:
                below += fuel
                fired = weight * float(made.sum()) / lowest
                hours += fired
                standing += standing_mwh_h * (weight * len(made) - fired)
            rate = np.interp(
                made,
                [mode.output_t_h[0], mode.output_t_h[-1]],
                [mode.starts_per_h_low, mode.starts_per_h_high],
            )
            starts += weight * float(rate.sum())
    service = np.array([bool(dispatch.in_service[row]) for dispatch in plan.dispatch])
    cold = boiler.cold_start_fuel_mwh * float(
        inputs.transitions_per_year[~service[:, None] & service[None, :]].sum()
    )
    start_fuel = boiler.start_fuel_mwh * starts
    return BoilerFlows(
        name=boiler.name,
        steam_t=steam,
        firing_fuel_mwh=firing,
        cycling_fuel_mwh=below - standing,
        standing_fuel_mwh=standing,
        start_fuel_mwh=start_fuel,
        cold_start_fuel_mwh=cold,
        pressure_fuel_mwh=(boiler.pressure_factor[pressure] - 1.0) * (firing + below + start_fuel + cold),
        burner_starts=starts,
        firing_hours=hours,
    )


def standing_fuel_mwh_h(boiler: PlanBoiler) -> float:
    """Fuel that keeps a boiler hot at no output [MWh/h]; 0 for one that cannot stand hot without firing."""
    return max((mode.fuel_mwh_h[0] for mode in boiler.modes if mode.output_t_h[0] == 0.0), default=0.0)
