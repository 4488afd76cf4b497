"""Choice, weights and stated errors of typical days."""

import datetime as dt

import numpy as np
import pytest
from scipy.stats import wasserstein_distance

from evenfire.demand.series import DemandRecord
from evenfire.demand.typical_days import typical_days
from evenfire.errors import RecordError


def record(days=28, step_s=900.0, start=dt.datetime(2026, 2, 2), seed=1):
    """A record with weekday shape and random peaks."""
    rng = np.random.default_rng(seed)
    steps = round(86_400 / step_s)
    flow = 0.3 + rng.random((days, steps)) ** 6 * 3.0
    for day in range(days):
        flow[day] *= (1.0, 1.0, 1.0, 1.0, 1.0, 0.4, 0.1)[(start + dt.timedelta(days=day)).weekday()]
    return DemandRecord(start=start, step_s=step_s, flow_kg_s=flow.ravel(), source="test")


def test_weights_add_up_to_a_year():
    """365 days, shared as the record's days are; peak days stand for themselves."""
    found = typical_days(record(), 900.0)
    assert sum(day.days_per_year for day in found.days) == pytest.approx(365.0, rel=1e-12)
    peaks = [day for day in found.days if day.name.startswith("peak day")]
    assert all(day.days_per_year == pytest.approx(365.0 / 28) for day in peaks)
    weights = {day.name: day.days_per_year for day in found.days}
    assert weights["saturday"] == pytest.approx(4 * 365.0 / 28)
    assert weights["workday"] == pytest.approx((20 - len(peaks)) * 365.0 / 28)


def test_days_are_real_days_of_their_kind():
    """Each profile stands in the record on its date, and the date is of the named kind."""
    measured = record()
    for day in typical_days(measured, 900.0).days:
        first = (day.date - measured.start.date()).days * 96
        np.testing.assert_allclose(day.flow_kg_s, measured.flow_kg_s[first : first + 96])
        kinds = {"workday": (0, 1, 2, 3, 4), "saturday": (5,), "sunday": (6,)}
        assert day.date.weekday() in kinds.get(day.name, range(7))


def test_highest_step_is_kept():
    """At the record's own step the peak is met exactly; averaged steps state how much they lose."""
    measured = record()
    assert typical_days(measured, 900.0).peak_error == 0.0
    hourly = typical_days(measured, 3600.0)
    highest = max(day.flow_kg_s.max() for day in hourly.days)
    assert hourly.peak_error == pytest.approx(highest / measured.flow_kg_s.max() - 1.0)
    assert hourly.peak_error < -0.1


def test_day_that_needs_most_storage_is_a_second_peak_day():
    """A long plateau needs more storage than the spike of the highest step."""
    measured = record()
    measured.flow_kg_s[96 * 2 + 40] = 9.0
    measured.flow_kg_s[96 * 3 + 40 : 96 * 3 + 60] = 8.0
    peaks = [day for day in typical_days(measured, 900.0).days if day.name.startswith("peak")]
    assert [day.date.day for day in peaks] == [4, 5]
    assert [day.name for day in peaks] == ["peak day 1", "peak day 2"]


def test_errors_agree_with_an_independent_library():
    """The duration-curve error is the Wasserstein distance of the two distributions (scipy)."""
    measured = record()
    found = typical_days(measured, 900.0)
    flow = np.concatenate([day.flow_kg_s for day in found.days])
    weights = np.concatenate([np.full(96, day.days_per_year) for day in found.days])
    mean = measured.flow_kg_s.mean()
    distance = wasserstein_distance(flow, measured.flow_kg_s, u_weights=weights) / mean
    assert found.duration_curve_error == pytest.approx(distance, rel=1e-9)
    assert found.energy_error == pytest.approx(np.average(flow, weights=weights) / mean - 1.0, abs=1e-12)


def test_only_complete_calendar_days_are_used():
    """A record from noon to noon loses its two halves."""
    measured = record(days=9, start=dt.datetime(2026, 2, 2, 12))
    found = typical_days(measured, 900.0)
    assert all(dt.date(2026, 2, 3) <= day.date <= dt.date(2026, 2, 10) for day in found.days)


@pytest.mark.parametrize("step_s", [0.0, 450.0, 1000.0, 25_200.0])
def test_steps_that_do_not_fit_are_refused(step_s):
    """Shorter than the record's, no multiple of it, or no divisor of a day."""
    with pytest.raises(RecordError, match=r"whole multiple.*R116"):
        typical_days(record(), step_s)


def test_record_without_a_complete_day_is_refused():
    """Noon to noon of one day holds no calendar day."""
    with pytest.raises(RecordError, match=r"no complete calendar day.*R117"):
        typical_days(record(days=1, start=dt.datetime(2026, 2, 2, 12)), 900.0)
