"""A pressure window is chosen as a whole: what it moves in the plan, and which way."""

from __future__ import annotations

import datetime as dt
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.vessels import WindowTable, window_tables
from evenfire.case.load import load_case
from evenfire.demand.series import DemandRecord
from evenfire.demand.storage_need import storage_need
from evenfire.demand.typical_days import typical_days
from evenfire.plan.inputs import PlanInputs, VesselSegment, VesselUse, WindowCurves, window_curves
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Stop
from evenfire.units import bar_g_to_pa
from tests.model.plants import rules

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"
VOLUME_M3 = 40.0


@pytest.fixture(scope="module")
def cannery() -> tuple[PlanInputs, tuple[WindowTable, ...]]:
    """Plan inputs of the cannery's equipment and prices on two weeks of a made quarter-hour demand."""
    case = load_case(CANNERY)
    flow = np.tile(np.repeat([0.4, 2.0, 1.0, 2.4], 24), 14) / 3.6
    record = DemandRecord(
        start=dt.datetime(2026, 2, 2), step_s=900.0, flow_kg_s=flow, source="made", notices=()
    )
    tables = window_tables(case)
    need = storage_need(record.flow_kg_s, record.step_s)
    quarter_hours = replace(case, plan=replace(case.plan, step_s=900.0))
    inputs = plan_inputs(quarter_hours, record, typical_days(record, 900.0), need, tables)
    return inputs, tables


def _window(cannery: tuple[PlanInputs, tuple[WindowTable, ...]], charged: float, discharged: float) -> int:
    """Number of the window between two gauge pressures."""
    return next(
        number
        for number, table in enumerate(cannery[1])
        if table.window.charged_pa == pytest.approx(bar_g_to_pa(charged))
        and table.window.discharged_pa == pytest.approx(bar_g_to_pa(discharged))
    )


def _curves(cannery: tuple[PlanInputs, tuple[WindowTable, ...]], *window: float) -> WindowCurves:
    return window_curves(cannery[0].vessel_segments)[_window(cannery, *window)]


@pytest.mark.parametrize(("low", "high"), [(8.5, 10.0), (10.0, 12.0), (12.0, 15.0)])
def test_higher_charged_pressure_moves_all_that_hangs_on_it(
    cannery: tuple[PlanInputs, tuple[WindowTable, ...]], low: float, high: float
) -> None:
    """More steam, price, heat loss and fuel from the same volume, and a wider surface at the lower level."""
    inputs, _ = cannery
    lower, higher = (_curves(cannery, charged, 5.2) for charged in (low, high))

    for name in ("capacity_t", "fixed_cost_k", "loss_t_h", "release_t_h"):
        assert higher.at(getattr(higher, name), VOLUME_M3) > lower.at(getattr(lower, name), VOLUME_M3), name
    for boiler in inputs.boilers:
        if boiler.pressure_allowed[higher.pressure]:
            assert boiler.pressure_factor[higher.pressure] > boiler.pressure_factor[lower.pressure]


@pytest.mark.parametrize(("low", "high"), [(4.6, 5.2), (5.2, 6.0)])
def test_lower_discharged_pressure_gives_more_steam_but_slower(
    cannery: tuple[PlanInputs, tuple[WindowTable, ...]], low: float, high: float
) -> None:
    """The window widens and the release limit falls; price, loss and boiler pressure stay."""
    wide, narrow = (_curves(cannery, 12.0, discharged) for discharged in (low, high))

    assert wide.at(wide.capacity_t, VOLUME_M3) > narrow.at(narrow.capacity_t, VOLUME_M3)
    assert wide.at(wide.release_t_h, VOLUME_M3) < narrow.at(narrow.release_t_h, VOLUME_M3)
    assert wide.at(wide.fixed_cost_k, VOLUME_M3) == pytest.approx(narrow.at(narrow.fixed_cost_k, VOLUME_M3))
    assert wide.at(wide.loss_t_h, VOLUME_M3) == pytest.approx(narrow.at(narrow.loss_t_h, VOLUME_M3), rel=0.01)
    assert wide.pressure == narrow.pressure


def test_boiler_pressure_is_todays_or_what_charging_asks_for(
    cannery: tuple[PlanInputs, tuple[WindowTable, ...]],
) -> None:
    """At 9 bar g today with 0.5 bar of charging drop, 8.5 bar g costs nothing and 15 bar g asks for 15.5."""
    inputs, tables = cannery
    today, highest = (_curves(cannery, charged, 5.2) for charged in (8.5, 15.0))

    assert today.pressure == 0
    assert all(boiler.pressure_factor[0] == 1.0 for boiler in inputs.boilers)
    assert tables[_window(cannery, 15.0, 5.2)].boiler_pa == pytest.approx(bar_g_to_pa(15.5))
    new = next(boiler for boiler in inputs.boilers if not boiler.existing)
    assert 1.004 < new.pressure_factor[highest.pressure] < 1.02


def _only(inputs: PlanInputs, window: int) -> PlanInputs:
    segments: tuple[VesselSegment, ...] = tuple(x for x in inputs.vessel_segments if x.window == window)
    return replace(inputs, vessel_segments=segments)


def test_a_boiler_too_weak_for_a_window_excludes_it(
    cannery: tuple[PlanInputs, tuple[WindowTable, ...]],
) -> None:
    """Boiler 2 may work at 10.5 bar g: with it, 12 bar g cannot be charged and 10 bar g can."""
    inputs, _ = cannery
    weak = inputs.boiler("Boiler 2, 2.5 t/h")
    within, beyond = (_window(cannery, charged, 5.2) for charged in (10.0, 12.0))
    assert weak.pressure_allowed[_curves(cannery, 10.0, 5.2).pressure]
    assert not weak.pressure_allowed[_curves(cannery, 12.0, 5.2).pressure]

    refused = best_plan(_only(inputs, beyond), RULES["storage"](inputs), gap=0.05, time_limit_s=10.0)
    taken = best_plan(_only(inputs, within), RULES["storage"](inputs), gap=0.05, time_limit_s=10.0)
    without = best_plan(
        _only(replace(inputs, boilers=inputs.boilers[:1]), beyond),
        rules(replace(inputs, boilers=inputs.boilers[:1]), vessel=VesselUse.REQUIRED),
        gap=0.05,
        time_limit_s=10.0,
    )

    assert refused.stop is Stop.INFEASIBLE
    assert taken.plan is not None
    assert without.plan is not None
