"""Limits of the storage-need functions that the published and property tests do not reach."""

import numpy as np
import pytest

from evenfire.demand.storage_need import shortfall_kg, storage_need, storage_need_at
from evenfire.errors import RecordError


@pytest.mark.parametrize("flow", [[], [1.0, -0.1], [1.0, np.nan], [np.inf], [[1.0]]])
def test_unusable_flow_is_refused(flow):
    """Empty, negative, missing, infinite and two-dimensional flows are no record."""
    with pytest.raises(RecordError, match="R120"):
        storage_need(np.array(flow), 60.0)


def test_all_wrong_arguments_are_named_at_once():
    """Step and capacity are checked together."""
    with pytest.raises(RecordError, match=r"step_s.*\n.*capacity"):
        storage_need_at(np.ones(3), 0.0, -1.0)


def test_negative_store_is_refused():
    """A store cannot be negative."""
    with pytest.raises(RecordError, match="storage_kg: found -1 kg"):
        shortfall_kg(np.ones(3), 60.0, 0.5, -1.0, 1.0)


def test_steady_demand_needs_no_storage():
    """Mean and peak are the same: one breakpoint, nothing to store."""
    need = storage_need(np.full(100_000, 1.1), 60.0)
    assert need.pieces == ()
    assert need.storage_kg.tolist() == [0.0]


def test_capacity_above_the_peak_has_an_empty_interval():
    """The interval of no need is empty, not a step that happens to be first."""
    piece = storage_need_at(np.array([1.0, 2.0]), 60.0, 2.0)
    assert (piece.energy_kg, piece.duration_s, piece.last_step - piece.first_step) == (0.0, 0.0, -1)


def test_slow_release_leaves_steam_unmet_however_large_the_store():
    """2 kg/s lacking for two steps with a release of 1.5 kg/s: 0.5 kg/s short for 120 s."""
    assert shortfall_kg(np.array([1.0, 3.0, 3.0]), 60.0, 1.0, 1e6, 1.5) == pytest.approx(60.0)


def test_long_record_stays_exact():
    """120 000 steps of a square wave: rounding adds neither pieces nor steam."""
    need = storage_need(np.tile([12.0, 4.0, 4.0, 4.0], 30_000) / 3.6, 3600.0)
    assert len(need.pieces) == 1
    assert need.storage_kg[0] == pytest.approx(6000.0, rel=1e-9)
