"""Burner starts: hand cases, and a simulated two-point controller on a steam buffer."""

import numpy as np
import pytest

from evenfire.boiler import cycling_starts_per_s
from evenfire.errors import OutOfRangeError


@pytest.mark.parametrize(
    ("load_t_h", "firing_t_h", "buffer_t", "starts_per_h"),
    [(3.0, 10.0, 0.2, 10.5), (5.0, 10.0, 0.2, 12.5), (1.0, 3.0, 0.2, 10.0 / 3.0)],
)
def test_starts_by_hand(load_t_h, firing_t_h, buffer_t, starts_per_h):
    """n = q (Q - q) / (B Q) for three hand cases (B19 to B21)."""
    starts = float(cycling_starts_per_s(load_t_h / 3.6, firing_t_h / 3.6, buffer_t * 1000.0)) * 3600.0
    assert starts == pytest.approx(starts_per_h, rel=1e-12)


def counted_starts_per_s(load, firing, buffer, minimum_off, standing, horizon=400_000.0, step=0.5):
    """Starts of a burner switched by the level of a steam buffer, stepped through time."""
    level, burning, off_since, starts = buffer, False, 0.0, 0
    for tick in range(int(horizon / step)):
        now = tick * step
        if burning and level >= buffer:
            burning, off_since = False, now
        elif not burning and level <= 0.0 and now - off_since >= minimum_off:
            burning, starts = True, starts + 1
        level += step * (firing - load if burning else -load - standing)
    return starts / horizon


@pytest.mark.parametrize("load", [0.0, 0.05, 0.2, 0.3])
@pytest.mark.parametrize(("minimum_off", "standing"), [(0.0, 0.0), (600.0, 0.0), (0.0, 0.02), (600.0, 0.02)])
def test_starts_as_a_simulated_controller_counts_them(load, minimum_off, standing):
    """The formula agrees with counting, with minimum off time and standing loss."""
    counted = counted_starts_per_s(load, 0.35, 60.0, minimum_off, standing)
    formula = float(cycling_starts_per_s(load, 0.35, 60.0, minimum_off, standing))
    one_start_and_half_a_percent_of_stepping = 1.0 / 400_000.0 + 0.01 * formula
    assert abs(counted - formula) <= one_start_and_half_a_percent_of_stepping


def test_starts_are_concave_and_vanish_at_full_firing():
    """No starts without load or at the firing output; concave in between, minimum off time or not."""
    loads = np.linspace(0.0, 0.35, 141)
    for minimum_off in (0.0, 300.0):
        starts = cycling_starts_per_s(loads, 0.35, 60.0, minimum_off)
        assert starts[0] == 0.0
        assert starts[-1] == 0.0
        assert (np.diff(starts, 2) <= 1e-15).all()


def test_refusals():
    """A load above the firing output and an empty buffer are refused with their limits."""
    with pytest.raises(OutOfRangeError, match=r"found 0\.5 kg/s; must lie between 0 and 0\.35 kg/s \[P111\]"):
        cycling_starts_per_s([0.1, 0.5], 0.35, 60.0)
    with pytest.raises(OutOfRangeError, match=r"steam buffer.*\[P114\]"):
        cycling_starts_per_s(0.1, 0.35, 0.0)
    with pytest.raises(OutOfRangeError, match=r"firing output.*\[P114\]"):
        cycling_starts_per_s(0.0, 0.0, 60.0)
