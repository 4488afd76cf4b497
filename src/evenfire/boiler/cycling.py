"""On/off firing below turndown: how often the burner starts and what a start costs in fuel."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from evenfire.boiler.curve import lowest_firing_efficiency_lhv
from evenfire.errors import out_of_range
from evenfire.plant import BoilerSpec
from evenfire.units import SECONDS_PER_HOUR
from evenfire.water import saturation

FloatArray = npt.NDArray[np.float64]


def cycling_starts_per_s(
    load_kg_s: npt.ArrayLike,
    firing_kg_s: float,
    buffer_kg: float,
    minimum_off_s: float = 0.0,
    standing_kg_s: float = 0.0,
) -> FloatArray:
    """Burner starts per second when a load below the firing output is met by on/off firing.

    The buffer empties in B/q with the burner off and fills in B/(Q - q) with it on, so
    n = q (Q - q) / (B Q). The standing loss empties the buffer too while the burner is off: with it as steam
    q0, the off time is B/(q + q0) and n = (q + q0)(Q - q) / (B (Q + q0)), which leaves q0/B or nearly so at
    no load: a boiler on hot standby fires now and then. Where the off time is shorter than the minimum, the
    burner stays off for that: n = (Q - q) / (t_off (Q + q0)), and the pressure falls below the cut-in
    pressure, to (q + q0) t_off / B times the band under cut-out.

    Parameters
    ----------
    load_kg_s : float or array
        Steam drawn q [kg/s], 0 to ``firing_kg_s``.
    firing_kg_s : float
        Output while firing Q [kg/s]: the rating of an on/off burner, rated/turndown of a modulating one.
    buffer_kg : float
        Steam the boiler's water gives between cut-out and cut-in pressure B [kg].
    minimum_off_s : float
        Shortest burner-off time [s].
    standing_kg_s : float
        Standing loss as steam q0 [kg/s].

    Returns
    -------
    array
        Burner starts [1/s], concave in the load.

    Raises
    ------
    OutOfRangeError
        P111 for a load outside 0 to ``firing_kg_s``; P114 for a firing output or buffer not above 0.

    References
    ----------
    Derived from the steam balance; the same parabola as the thermostat cycling law (from memory: NEMA DC 3).

    Examples
    --------
    10 t/h firing, 3 t/h load, 0.2 t of buffer: 10.5 starts per hour.

    >>> round(float(cycling_starts_per_s(3 / 3.6, 10 / 3.6, 200.0)) * 3600, 9)
    10.5
    """
    if not firing_kg_s > 0.0:
        raise out_of_range("P114", "firing output", firing_kg_s, "kg/s", 0.0, np.inf)
    if not buffer_kg > 0.0:
        raise out_of_range("P114", "steam buffer of the boiler", buffer_kg, "kg", 0.0, np.inf)
    load = np.asarray(load_kg_s, dtype=np.float64)
    inside = (load >= 0.0) & (load <= firing_kg_s * (1.0 + 1.0e-9))
    if not inside.all():
        worst = float(load[~inside].flat[0]) if load.ndim else float(load)
        raise out_of_range("P111", "load of a cycling burner", worst, "kg/s", 0.0, firing_kg_s)
    spare = np.maximum(firing_kg_s - load, 0.0)
    gross = firing_kg_s + standing_kg_s
    emptying = load + standing_kg_s
    return np.asarray(emptying / np.maximum(buffer_kg, emptying * minimum_off_s) * spare / gross)


def standing_steam_kg_s(spec: BoilerSpec, working_pa: float) -> float:
    """The standing loss as steam of the working pressure, loss over latent heat [kg/s].

    Raises
    ------
    OutOfRangeError
        P101 for a pressure outside the tables.
    """
    at = saturation(working_pa)
    return spec.standing_loss_w / float(at.enthalpy_vapour_j_kg - at.enthalpy_liquid_j_kg)


def start_fuel_j_lhv(spec: BoilerSpec, working_pa: float) -> float:
    """Fuel (net) that makes good the heat one burner start's purge air carries off [J].

    Raises
    ------
    OutOfRangeError
        As :func:`evenfire.boiler.curve.efficiency_lhv`.
    """
    return spec.purge_energy_j / lowest_firing_efficiency_lhv(spec, working_pa)


def cycling_starts_per_hour(load_kg_h: float, firing_kg_h: float, buffer_kg: float) -> float:
    """Burner starts per hour of on/off firing in trade units: n = q (Q - q) / (B Q).

    For use by hand; :func:`cycling_starts_per_s` is the same law with minimum off time and standing loss.

    Parameters
    ----------
    load_kg_h, firing_kg_h : float
        Steam drawn and output while firing [kg/h].
    buffer_kg : float
        Steam the boiler's water gives between cut-out and cut-in pressure [kg].

    Raises
    ------
    OutOfRangeError
        P111, P114 as :func:`cycling_starts_per_s`.

    Examples
    --------
    >>> round(cycling_starts_per_hour(3000.0, 10000.0, 200.0), 9)
    10.5
    """
    starts = cycling_starts_per_s(load_kg_h / SECONDS_PER_HOUR, firing_kg_h / SECONDS_PER_HOUR, buffer_kg)
    return float(starts) * SECONDS_PER_HOUR
