"""Adding typical days until stated errors are met."""

import datetime as dt
from dataclasses import fields, replace
from pathlib import Path

import numpy as np
import pytest

from evenfire.demand.enough_days import DayTolerances, enough_typical_days
from evenfire.demand.read import demand_record
from evenfire.demand.series import DemandRecord
from evenfire.demand.typical_days import typical_days
from evenfire.errors import RecordError
from tests.demand.record_files import form

CANNERY = Path(__file__).parents[2] / "cases" / "cannery" / "steam.csv.gz"
NONE = DayTolerances(energy=0.0, duration_curve=0.0, peak_steam=0.0, peak_time=0.0, cost=0.0)
ANY = DayTolerances(energy=9.0, duration_curve=9.0, peak_steam=9.0, peak_time=9.0)


@pytest.fixture(scope="module")
def cannery():
    """The invented cannery's record."""
    return demand_record(CANNERY, form(flow_column="steam_kg_h"))


def test_loose_tolerances_give_the_plain_typical_days(cannery):
    """Nothing is added where nothing is asked."""
    found = enough_typical_days(cannery, 900.0, 2.0, ANY, 10)
    plain = typical_days(cannery, 900.0)
    assert found.met
    assert [(d.name, d.date, d.days_per_year) for d in found.days.days] == [
        (d.name, d.date, d.days_per_year) for d in plain.days
    ]


def test_errors_fall_within_their_tolerances(cannery):
    """Days are added, fewer than there are, until every error is small enough."""
    tolerances = DayTolerances(energy=0.002, duration_curve=0.02, peak_steam=0.05, peak_time=0.05)
    found = enough_typical_days(cannery, 900.0, 2.0, tolerances, 56)
    assert found.met
    assert 5 < len(found.days.days) < 56
    for name in ("energy", "duration_curve", "peak_steam", "peak_time"):
        assert abs(getattr(found.errors, name)) <= getattr(tolerances, name)
    assert sum(day.days_per_year for day in found.days.days) == pytest.approx(365.0, rel=1e-12)


def test_errors_are_those_of_the_weighted_days(cannery):
    """Energy and peaks recomputed from the days that came back."""
    found = enough_typical_days(cannery, 900.0, 2.0, ANY, 10)
    whole = cannery.flow_kg_s.reshape(-1, 15).mean(axis=1)
    weights = [day.days_per_year / 365.0 for day in found.days.days]
    flows = [day.flow_kg_s for day in found.days.days]
    energy = sum(w * f.mean() for w, f in zip(weights, flows, strict=True)) / whole.mean() - 1.0
    above = sum(w * np.maximum(f - 2.0, 0.0).mean() for w, f in zip(weights, flows, strict=True))
    assert found.errors.energy == pytest.approx(energy, abs=1e-12)
    assert found.errors.peak_steam == pytest.approx(above / np.maximum(whole - 2.0, 0.0).mean() - 1.0)


def test_every_day_of_its_own_leaves_no_error(cannery):
    """With all 56 days nothing is lost, and no tolerance of zero stops it earlier."""
    found = enough_typical_days(cannery, 900.0, 2.0, NONE, 56)
    assert len({day.date for day in found.days.days}) == len(found.days.days) == 56
    assert found.errors.energy == pytest.approx(0.0, abs=1e-12)
    assert found.errors.duration_curve == pytest.approx(0.0, abs=1e-12)


def test_too_few_days_are_said_to_be_too_few(cannery):
    """The limit on days is kept and the miss stated."""
    found = enough_typical_days(cannery, 900.0, 2.0, NONE, 8)
    assert not found.met
    assert len(found.days.days) == 8
    assert [count for count, _ in found.tried] == [5, 6, 7, 8]


def test_cost_error_is_asked_last_and_adds_days(cannery):
    """A cost comparison that asks for ten days gets ten; it is not called for days that fail before."""
    asked = []

    def cost_error(days):
        asked.append(len(days.days))
        return 0.01 if len(days.days) < 10 else -0.004

    tolerances = replace(ANY, energy=0.003)
    found = enough_typical_days(cannery, 900.0, 2.0, tolerances, 56, cost_error)
    assert found.met
    assert found.errors.cost == -0.004
    assert len(found.days.days) >= 10
    failed = [count for count, errors in found.tried if abs(errors.energy) > 0.003]
    assert not set(failed) & set(asked)


def test_days_of_one_kind_stand_for_that_kind_alone(cannery):
    """Names keep the kind; Sundays never stand for workdays."""
    found = enough_typical_days(cannery, 900.0, 2.0, NONE, 30)
    for day in found.days.days:
        if day.name.startswith("sunday"):
            assert day.date.weekday() == 6
        if day.name.startswith("workday"):
            assert day.date.weekday() < 5


def test_equal_days_need_no_splitting():
    """A record of equal weeks is exact with one day of each kind."""
    week = np.repeat([2.0, 2.0, 2.0, 2.0, 2.0, 1.0, 0.5], 24)
    record = DemandRecord(
        start=dt.datetime(2026, 2, 2), step_s=3600.0, flow_kg_s=np.tile(week, 4), source="test"
    )
    found = enough_typical_days(record, 3600.0, 1.5, DayTolerances(energy=1e-9, duration_curve=1e-9), 28)
    assert found.met
    assert len(found.days.days) == 4


def test_impossible_requests_are_refused(cannery):
    """Negative tolerances and too few days, all at once."""
    wrong = DayTolerances(**{field.name: -1.0 for field in fields(DayTolerances)})
    with pytest.raises(RecordError, match="found 3 days; allow at least 5") as refused:
        enough_typical_days(cannery, 900.0, 2.0, wrong, 3)
    assert len(refused.value.problems) == 6
