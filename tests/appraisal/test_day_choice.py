"""Typical days are added until the same plant costs the same on them as on every day of the record."""

from __future__ import annotations

import datetime as dt
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from evenfire.appraisal.day_choice import (
    MOST_DAYS,
    chosen_days,
    compared_plants,
    day_notices,
    every_day,
    operating_cost_k,
)
from evenfire.appraisal.plan_inputs import plan_days, plan_inputs, transitions_per_year
from evenfire.appraisal.vessels import window_tables
from evenfire.case.case import Case
from evenfire.case.load import load_case
from evenfire.demand.enough_days import EnoughDays
from evenfire.demand.read import demand_record
from evenfire.demand.series import DemandRecord
from evenfire.demand.storage_need import storage_need
from evenfire.demand.typical_days import day_kind, typical_days
from evenfire.plan.day import NO_STORE
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.operation import Operation, Plant

CASES = Path(__file__).parents[2] / "cases"


@pytest.fixture(scope="module")
def dyehouse() -> Case:
    return load_case(CASES / "dyehouse")


@pytest.fixture(scope="module")
def record(dyehouse: Case) -> DemandRecord:
    return demand_record(dyehouse.record_file, dyehouse.record_format)


@pytest.fixture(scope="module")
def chosen(dyehouse: Case, record: DemandRecord) -> EnoughDays:
    return _chosen(dyehouse, record)


@pytest.fixture(scope="module")
def inputs(dyehouse: Case, record: DemandRecord) -> PlanInputs:
    need = storage_need(record.flow_kg_s, record.step_s)
    return plan_inputs(dyehouse, record, typical_days(record, 900.0), need, window_tables(dyehouse))


def _chosen(case: Case, record: DemandRecord) -> EnoughDays:
    need = storage_need(record.flow_kg_s, record.step_s)
    return chosen_days(case, record, need, window_tables(case))


def _few(inputs: PlanInputs, found: EnoughDays) -> PlanInputs:
    days = found.days
    return replace(inputs, days=plan_days(days), transitions_per_year=transitions_per_year(days))


def test_the_stated_error_is_that_of_both_plants_at_worst(inputs: PlanInputs, chosen, record) -> None:
    """Both plants recomputed day by day, every real day against the weighted few: the worse one is stated."""
    errors = []
    for plant in compared_plants(inputs):
        whole = 0.0
        for date in np.arange(56):
            flow = record.flow_kg_s[96 * date : 96 * (date + 1)]
            alone = replace(record, flow_kg_s=flow, start=record.start + dt.timedelta(days=int(date)))
            whole += operating_cost_k(every_day(inputs, alone), plant) / 56.0
        errors.append(operating_cost_k(_few(inputs, chosen), plant) / whole - 1.0)

    assert chosen.met
    assert chosen.errors.cost == pytest.approx(max(errors, key=abs), abs=2e-4)
    assert abs(chosen.errors.cost) <= 0.005


def test_a_plant_that_had_no_say_costs_nearly_the_same_too(inputs: PlanInputs, chosen, record) -> None:
    """New boilers in place of today's were not compared when the days were chosen, yet agree to 1 %."""
    for name in ("New boiler, 5 t/h", "New boiler, 6 t/h"):
        plant = Plant(boilers=(name,), pressure=0, store=NO_STORE)
        few = operating_cost_k(_few(inputs, chosen), plant)
        assert few == pytest.approx(operating_cost_k(every_day(inputs, record), plant), rel=0.01)


def test_every_day_of_the_record_is_one_of_the_typical_days(chosen, record) -> None:
    """Weights are counts of the days assigned, each of its own kind or a peak day that stands for itself."""
    days, assigned = chosen.days.days, chosen.days.assigned
    counts = np.bincount(assigned, minlength=len(days))

    assert len(assigned) == 56
    assert [day.days_per_year for day in days] == pytest.approx(counts * 365.0 / 56.0)
    for number, at in enumerate(assigned):
        date = record.start.date() + dt.timedelta(days=number)
        assert days[at].date == date or days[at].name.startswith(day_kind(date))


def test_transitions_are_counted_from_the_real_sequence(chosen) -> None:
    """As many days begin as end: rows and columns sum to the weights; one pair is counted by hand."""
    days, assigned = chosen.days, chosen.days.assigned
    transitions = transitions_per_year(days)
    weights = [day.days_per_year for day in days.days]
    pairs = list(zip(assigned, (*assigned[1:], assigned[0]), strict=True))

    assert transitions.sum(axis=0) == pytest.approx(weights)
    assert transitions.sum(axis=1) == pytest.approx(weights)
    assert transitions[0, 0] == pytest.approx(pairs.count((0, 0)) * 365.0 / 56.0)


def test_a_tighter_tolerance_takes_more_days_and_what_is_missed_is_said(
    dyehouse: Case, record, chosen
) -> None:
    """At a tolerance of nothing twelve days are reached and the remaining error is a warning."""
    strict = replace(dyehouse, plan=replace(dyehouse.plan, typical_days_error=0.0))
    found = _chosen(strict, record)
    (notice,) = day_notices(strict, found)

    assert len(chosen.days.days) < len(found.days.days) <= MOST_DAYS
    assert not found.met
    assert f"{100.0 * found.errors.cost:+.2f} %" in notice.text
    assert day_notices(dyehouse, chosen) == ()


def test_days_that_repeat_exactly_leave_no_error(dyehouse: Case, record) -> None:
    """A record of the same week over and over is reproduced by five days to rounding."""
    week = record.flow_kg_s[: 7 * 96].copy()
    week[96 : 5 * 96] = np.tile(week[:96], 4)
    same = replace(record, flow_kg_s=np.tile(week, 8))
    found = _chosen(dyehouse, same)

    assert len(found.days.days) <= 5
    assert abs(found.errors.cost) < 1e-9


def test_the_vessel_compared_covers_the_peaks(inputs: PlanInputs) -> None:
    """The storage plant's vessel meets every critical interval of the record with today's boilers."""
    _, stored = compared_plants(inputs)
    firm = sum(inputs.boiler(name).rated_t_h for name in stored.boilers)

    assert stored.store.release_t_h + firm >= inputs.peak_t_h - 1e-9
    for cut in inputs.cuts:
        assert stored.store.capacity_t + cut.duration_h * firm >= cut.energy_t - 1e-9


def test_a_finer_grid_does_not_move_the_error(inputs: PlanInputs, chosen, record) -> None:
    """Halving the recursion's quantum twice moves the error by less than 0.1 points."""
    plant = compared_plants(inputs)[0]
    rough, fine = (
        Operation(_few(inputs, chosen), joined=False).bound(plant, stage)[0]
        / Operation(every_day(inputs, record), joined=False).bound(plant, stage)[0]
        for stage in (1, 3)
    )
    assert fine == pytest.approx(rough, abs=1e-3)
