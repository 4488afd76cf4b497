"""Figures that describe a record."""

import datetime as dt

import numpy as np
import pytest

from evenfire.demand.series import DemandRecord
from evenfire.demand.statistics import demand_statistics, load_duration_curve
from evenfire.errors import RecordError


def record(flow):
    """A one-minute record."""
    return DemandRecord(
        start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=np.array(flow, dtype=float), source="test"
    )


def test_statistics_of_a_small_record():
    """Numbers added up by hand."""
    found = demand_statistics(record([1.0, 4.0, 2.0, 1.0]))
    assert (found.steam_kg, found.mean_kg_s, found.lowest_kg_s, found.peak_kg_s) == (480.0, 2.0, 1.0, 4.0)
    assert (found.load_factor, found.steepest_rise_kg_s2) == (0.5, 0.05)


def test_thinned_curve_lies_on_the_true_one():
    """Every point of the thinned curve is a value of the record at its true rank, ends included."""
    flow = np.random.default_rng(0).random(5000)
    curve = load_duration_curve(record(flow), 200)
    ranks = np.round(curve.share * 4999).astype(int)
    np.testing.assert_array_equal(curve.flow_kg_s, np.sort(flow)[::-1][ranks])
    assert (curve.flow_kg_s[0], curve.flow_kg_s[-1]) == (flow.max(), flow.min())
    assert curve.share.size <= 200


def test_curve_needs_two_points():
    """One point is no curve."""
    with pytest.raises(RecordError, match="at least 2"):
        load_duration_curve(record([1.0, 2.0]), 1)
