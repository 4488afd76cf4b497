"""S(C) against brute force over every interval, and what must hold for any record."""

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.demand.storage_need import shortfall_kg, storage_need, storage_need_at

flows = st.lists(
    st.one_of(st.floats(0.0, 12.0), st.sampled_from([0.0, 1.0, 2.5, 10.0])), min_size=1, max_size=40
).map(np.array)


def need_by_brute_force(flow_kg_s, step_s, capacity_kg_s):
    """Largest excess of demand over capacity in any of the n (n + 1) / 2 intervals [kg]."""
    cumulated = np.concatenate([[0.0], np.cumsum((flow_kg_s - capacity_kg_s) * step_s)])
    return float(np.triu(cumulated[None, :] - cumulated[:, None]).max())


@given(flow=flows, share=st.floats(0.0, 1.2))
def test_curve_and_single_evaluation_agree_with_brute_force(flow, share):
    """At any capacity both methods give the largest excess over all intervals."""
    capacity = share * float(flow.max())
    piece = storage_need_at(flow, 60.0, capacity)
    curve = storage_need(flow, 60.0, lowest_capacity_kg_s=0.0)
    expected = need_by_brute_force(flow, 60.0, capacity)
    at = np.interp(capacity, curve.capacity_kg_s, curve.storage_kg)
    np.testing.assert_allclose(piece.energy_kg - capacity * piece.duration_s, expected, atol=1e-7)
    np.testing.assert_allclose(at, expected, atol=1e-7)


@given(flow=flows)
def test_curve_is_convex_and_falls_to_zero_at_the_peak(flow):
    """Slopes rise towards zero, capacities rise strictly, and the peak needs nothing."""
    curve = storage_need(flow, 60.0)
    assert (np.diff(curve.capacity_kg_s) > 0.0).all()
    assert curve.storage_kg[-1] == 0.0
    assert len(curve.pieces) == curve.capacity_kg_s.size - 1
    slopes = [-piece.duration_s for piece in curve.pieces]
    assert slopes == sorted(slopes)
    if curve.pieces:
        assert curve.capacity_kg_s[-1] == flow.max()


@given(flow=flows)
def test_every_piece_is_the_steam_of_its_interval(flow):
    """Energy and duration of a piece can be added up again from the record."""
    for piece in storage_need(flow, 60.0).pieces:
        interval = flow[piece.first_step : piece.last_step + 1]
        np.testing.assert_allclose(piece.energy_kg, interval.sum() * 60.0, rtol=1e-9)
        assert piece.duration_s == interval.size * 60.0


@given(flow=flows, share=st.floats(0.0, 1.0), part=st.floats(0.0, 1.0))
@settings(max_examples=50)
def test_store_of_the_need_meets_all_and_a_smaller_one_misses(flow, share, part):
    """S(C) is sufficient and necessary: a store smaller by x misses at least x."""
    capacity = share * float(flow.max())
    need = need_by_brute_force(flow, 60.0, capacity)
    assert shortfall_kg(flow, 60.0, capacity, need, 20.0) <= 1e-7
    missed = shortfall_kg(flow, 60.0, capacity, part * need, 20.0)
    assert missed >= (1.0 - part) * need - 1e-7
