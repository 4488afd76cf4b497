"""What a hot boiler can be doing, as convex pieces that a model can choose between."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from evenfire.boiler.curve import convex_pieces, fuel_curve, lowest_firing_efficiency_lhv
from evenfire.boiler.cycling import cycling_starts_per_s, standing_steam_kg_s
from evenfire.plant import BoilerSpec

FloatArray = npt.NDArray[np.float64]

CYCLING_PARTS = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class OperatingMode:
    """One way of running a hot boiler, between two outputs."""

    name: str
    firing: bool
    """True where the burner burns without stopping."""
    low_kg_s: float
    high_kg_s: float
    output_kg_s: FloatArray
    """Points of the fuel curve, ``low_kg_s`` to ``high_kg_s`` [kg/s]."""
    fuel_w_lhv: FloatArray
    """Fuel power at each point, convex and linear in between, without the fuel of starts [W]."""
    starts_per_s_low: float
    """Burner starts at ``low_kg_s`` [1/s]; linear to ``starts_per_s_high``."""
    starts_per_s_high: float


def operating_modes(spec: BoilerSpec, working_pa: float, feedwater_k: float) -> tuple[OperatingMode, ...]:
    """Hot standby, cycling and firing of one boiler, each convex in the output.

    - ``hot standby``: no output, fuel makes good the standing loss at the efficiency of lowest firing, with
      the few burner starts that takes;
    - ``cycling 1`` to ``cycling 4``: on/off firing below rated/turndown. Fuel is the time share q/Q of
      lowest firing plus the share 1 - q/Q of the standing loss; starts follow the parabola of
      :func:`cycling_starts_per_s`, linear between five points;
    - ``firing`` (``firing 1``, ``firing 2``, ... where the fuel curve is not convex): one mode per convex
      piece, together the exact fuel curve.

    Parameters
    ----------
    spec : BoilerSpec
    working_pa : float
        Absolute working pressure [Pa].
    feedwater_k : float
        Feedwater temperature [K].

    Returns
    -------
    tuple of OperatingMode
        In rising output. The fuel of starts is not in ``fuel_w_lhv``: add
        starts times :func:`evenfire.boiler.cycling.start_fuel_j_lhv`.

    Raises
    ------
    OutOfRangeError
        As :func:`evenfire.boiler.curve.fuel_curve` and :func:`cycling_starts_per_s`.

    Notes
    -----
    Chords of the parabola lie below it by at most Q / (64 B) starts per second, one sixteenth of its peak
    Q / (4 B), midway between two points.
    """
    curve = fuel_curve(spec, working_pa, feedwater_k)
    standing_w = spec.standing_loss_w / lowest_firing_efficiency_lhv(spec, working_pa)
    lowest_kg_s, lowest_w = float(curve.output_kg_s[0]), float(curve.fuel_w_lhv[0])
    loads = np.linspace(0.0, lowest_kg_s, CYCLING_PARTS + 1)
    starts = cycling_starts_per_s(
        loads, lowest_kg_s, spec.buffer_kg, spec.minimum_off_s, standing_steam_kg_s(spec, working_pa)
    )
    fuel = standing_w + loads / lowest_kg_s * (lowest_w - standing_w)
    modes = [
        OperatingMode(
            name="hot standby",
            firing=False,
            low_kg_s=0.0,
            high_kg_s=0.0,
            output_kg_s=np.array([0.0]),
            fuel_w_lhv=np.array([standing_w]),
            starts_per_s_low=float(starts[0]),
            starts_per_s_high=float(starts[0]),
        )
    ]
    for part in range(CYCLING_PARTS):
        span = slice(part, part + 2)
        modes.append(
            OperatingMode(
                name=f"cycling {part + 1}",
                firing=False,
                low_kg_s=float(loads[part]),
                high_kg_s=float(loads[part + 1]),
                output_kg_s=loads[span],
                fuel_w_lhv=fuel[span],
                starts_per_s_low=float(starts[part]),
                starts_per_s_high=float(starts[part + 1]),
            )
        )
    pieces = convex_pieces(curve)
    for number, piece in enumerate(pieces, start=1):
        modes.append(
            OperatingMode(
                name="firing" if len(pieces) == 1 else f"firing {number}",
                firing=True,
                low_kg_s=float(piece.output_kg_s[0]),
                high_kg_s=float(piece.output_kg_s[-1]),
                output_kg_s=piece.output_kg_s,
                fuel_w_lhv=piece.fuel_w_lhv,
                starts_per_s_low=0.0,
                starts_per_s_high=0.0,
            )
        )
    return tuple(modes)
