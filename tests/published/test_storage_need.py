"""Storage against firm boiler capacity for a square wave, derived by hand.

Source: checks row O9, derived: demand of 12 t/h for 1 h, then 4 t/h for 3 h, periodic. The smallest boiler
is the mean, 6 t/h, with S = 6 t; with S = 3 t the boiler must make 9 t/h.
"""

import numpy as np
import pytest

from evenfire.demand.storage_need import shortfall_kg, storage_need, storage_need_kg

STEP_S = 900.0
SQUARE_WAVE_KG_H = np.tile(np.repeat([12_000.0, 4_000.0, 4_000.0, 4_000.0], 4), 6)


def test_smallest_boiler_of_the_square_wave_needs_six_tonnes():
    """O9: at the mean of 6 t/h the store must hold 6 t."""
    need = storage_need(SQUARE_WAVE_KG_H / 3600.0, STEP_S)
    assert need.capacity_kg_s[0] * 3600.0 == pytest.approx(6000.0, rel=1e-12)
    assert need.storage_kg[0] == pytest.approx(6000.0, rel=1e-9)


def test_three_tonnes_of_storage_leave_a_boiler_of_nine_tonnes_per_hour():
    """O9: S(9 t/h) = 3 t, on the curve and by the single evaluation."""
    assert storage_need_kg(SQUARE_WAVE_KG_H, STEP_S, 9000.0) == pytest.approx(3000.0, rel=1e-12)
    need = storage_need(SQUARE_WAVE_KG_H / 3600.0, STEP_S)
    assert np.interp(2.5, need.capacity_kg_s, need.storage_kg) == pytest.approx(3000.0, rel=1e-9)


def test_square_wave_has_one_piece_of_one_hour():
    """Between the mean and the peak one interval rules: the hour at 12 t/h."""
    need = storage_need(SQUARE_WAVE_KG_H / 3600.0, STEP_S)
    assert len(need.pieces) == 1
    assert need.pieces[0].duration_s == 3600.0
    assert need.pieces[0].energy_kg == pytest.approx(12_000.0, rel=1e-12)


def test_store_of_six_tonnes_carries_the_mean_boiler_through_every_period():
    """A store of S(C) leaves nothing unmet; a tonne less leaves a tonne unmet in each of six periods."""
    flow_kg_s = SQUARE_WAVE_KG_H / 3600.0
    capacity_kg_s = 6000.0 / 3600.0
    assert shortfall_kg(flow_kg_s, STEP_S, capacity_kg_s, 6000.001, 10.0) == 0.0
    assert shortfall_kg(flow_kg_s, STEP_S, capacity_kg_s, 5000.0, 10.0) == pytest.approx(6000.0, rel=1e-9)
