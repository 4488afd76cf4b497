"""Storage need with limits against brute force, and what must hold for any record."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.demand.storage_limits import grown_storage_need, limited_storage_need
from evenfire.demand.storage_need import shortfall_kg, storage_need
from evenfire.errors import RecordError

flows = st.lists(st.floats(0.0, 12.0), min_size=2, max_size=40).map(np.array)


def need_by_brute_force(flow_kg_s, step_s, capacity, recharge, efficiency):
    """Largest sum of draws less recharge in any interval [kg]."""
    spare = np.minimum(np.maximum(capacity - flow_kg_s, 0.0), recharge)
    change = np.maximum(flow_kg_s - capacity, 0.0) - efficiency * spare
    total = np.concatenate([[0.0], np.cumsum(change * step_s)])
    return float(np.triu(total[None, :] - total[:, None]).max())


@given(flow=flows, recharge=st.floats(0.05, 5.0), efficiency=st.floats(0.5, 1.0), share=st.floats(0.0, 1.0))
@settings(deadline=None)
def test_curve_holds_the_truth_between_itself_and_its_error(flow, recharge, efficiency, share):
    """Exact at breakpoints; between them straight lines lie above the truth by at most the error."""
    need = limited_storage_need(flow, 60.0, recharge, efficiency, np.inf, 2.0)
    low, high = need.capacity_kg_s[[0, -1]]
    for capacity in (*need.capacity_kg_s, low + share * (high - low)):
        truth = need_by_brute_force(flow, 60.0, capacity, recharge, efficiency)
        line = float(np.interp(capacity, need.capacity_kg_s, need.storage_kg))
        assert truth - 1e-6 <= line <= truth + 2.0 + 1e-6
        for cut in need.cuts:
            assert cut.energy_kg - cut.duration_s * capacity <= truth + 1e-6


@given(flow=flows)
@settings(deadline=None)
def test_without_limits_it_is_the_plain_storage_need(flow):
    """Infinite rates and no loss give the same curve."""
    plain = storage_need(flow, 60.0)
    limited = limited_storage_need(flow, 60.0, np.inf, 1.0, np.inf, 1e-6)
    at = np.interp(limited.capacity_kg_s, plain.capacity_kg_s, plain.storage_kg)
    np.testing.assert_allclose(limited.storage_kg, at, atol=1e-5)


@given(flow=flows, recharge=st.floats(0.05, 5.0))
@settings(deadline=None)
def test_slower_recharge_never_needs_less(flow, recharge):
    """Half the rate of charging needs at least as much storage."""
    fast = limited_storage_need(flow, 60.0, recharge, 1.0, np.inf, 1e-3)
    slow = limited_storage_need(flow, 60.0, recharge / 2.0, 1.0, np.inf, 1e-3)
    at = np.interp(fast.capacity_kg_s, slow.capacity_kg_s, slow.storage_kg)
    assert (at >= fast.storage_kg - 2e-3).all()


@given(flow=flows, growth=st.floats(0.5, 3.0))
@settings(deadline=None)
def test_growth_scales_the_curve(flow, growth):
    """The scaled curve is the curve of the scaled record."""
    scaled = grown_storage_need(storage_need(flow, 60.0), growth)
    fresh = storage_need(flow * growth, 60.0)
    at = np.interp(scaled.capacity_kg_s, fresh.capacity_kg_s, fresh.storage_kg)
    np.testing.assert_allclose(scaled.storage_kg, at, atol=1e-6, rtol=1e-9)


def test_release_limit_gives_the_least_capacity():
    """Peak 5 kg/s with 1.5 kg/s of release needs 3.5 kg/s of boiler; below it the shortfall stays."""
    flow = np.array([1.0, 5.0, 1.0, 1.0])
    need = limited_storage_need(flow, 60.0, np.inf, 1.0, 1.5, 1e-3)
    assert need.least_capacity_kg_s == need.capacity_kg_s[0] == 3.5
    assert shortfall_kg(flow, 60.0, 3.5, float(need.storage_kg[0]), 1.5) == 0.0
    assert shortfall_kg(flow, 60.0, 3.4, 1e9, 1.5) > 0.0


def test_impossible_limits_are_refused_together():
    """All limits are checked at once."""
    with pytest.raises(RecordError, match=r"recharge_kg_s.*\n.*release_kg_s.*\n.*error_kg.*\n.*efficiency"):
        limited_storage_need(np.ones(4), 60.0, 0.0, 1.5, -1.0, 0.0)
    with pytest.raises(RecordError, match="growth: found 0"):
        grown_storage_need(storage_need(np.ones(4), 60.0), 0.0)
