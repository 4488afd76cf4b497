"""Published cost correlations with their year, index, range and source; US dollars, US Gulf Coast.

Every cost holds for carbon steel. How a correlation is used is in :mod:`evenfire.money.cost_basis`.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field

from evenfire.units import SECONDS_PER_HOUR

W_PER_KW = 1000.0
STEAM_BOILER_BARE_MODULE_FACTOR = 2.19

TURTON = "Turton et al., Analysis, Synthesis and Design of Chemical Processes, 4th ed., Appendix A"
TOWLER = "Towler and Sinnott, Chemical Engineering Design"


@dataclass(frozen=True, slots=True, kw_only=True)
class Correlation:
    """A published cost of one kind of equipment against its size."""

    name: str
    source: str
    confirmed: bool
    """Whether the coefficients were compared with a second copy of the source."""
    basis_date: str
    basis_index: float
    """Chemical Engineering Plant Cost Index that belongs to the correlation's dollars [1]."""
    size_name: str
    size_unit: str
    smallest: float
    largest: float
    """Range of sizes in the source, in ``size_unit``."""
    lowest_bar_g: float
    highest_bar_g: float
    """Range of design pressures [bar g]."""
    needs_diameter: bool
    installed: bool
    """Whether ``cost_usd`` is the installed cost; else that of the equipment at the maker's gate."""
    installation_factor: float | None
    """Installed over purchased cost in the source; None if the source gives none."""
    cost_usd: Callable[[float, float, float], float] = field(repr=False)
    """Cost of size in ``size_unit``, design pressure [bar g] and inside diameter [m]."""


def steam_boiler_pressure_factor(pressure_bar_g: float) -> float:
    """Cost of a steam boiler over that of one for low pressure: 1 up to 20 bar g, 1.7 at 40 bar g.

    Formula above 20 bar g: ``log10 F = 2.594072 - 4.23476 log10 P + 1.722404 (log10 P) ** 2``.

    Parameters
    ----------
    pressure_bar_g : float
        Design pressure [bar g], up to 40.

    Returns
    -------
    float
        Factor on cost [1].

    References
    ----------
    Turton et al., Table A.2.

    Examples
    --------
    >>> steam_boiler_pressure_factor(30.0)
    1.249998
    """
    if pressure_bar_g <= 20.0:
        return 1.0
    decades = math.log10(pressure_bar_g)
    return float(10.0 ** (2.594072 - 4.23476 * decades + 1.722404 * decades**2))


def vessel_pressure_factor(pressure_bar_g: float, diameter_m: float) -> float:
    """Cost of a vessel over that of one for low pressure, by the wall that the pressure asks for.

    Formula: ``max(1, ((P + 1) D / (2 (850 - 0.6 (P + 1))) + 0.00315) / 0.0063)``.

    Parameters
    ----------
    pressure_bar_g : float
        Design pressure [bar g].
    diameter_m : float
        Inside diameter [m].

    Returns
    -------
    float
        Factor on cost [1].

    References
    ----------
    Turton et al., equation A.2.

    Examples
    --------
    >>> vessel_pressure_factor(10.0, 2.0)
    2.570230
    """
    pressure = pressure_bar_g + 1.0
    return max(1.0, (pressure * diameter_m / (2.0 * (850.0 - 0.6 * pressure)) + 0.00315) / 0.0063)


def logarithmic_cost(k1: float, k2: float, k3: float, size: float) -> float:
    """Purchased cost [USD] by ``log10 C = K1 + K2 log10 A + K3 (log10 A) ** 2``.

    References
    ----------
    Turton et al., equation A.1 and Table A.1.

    Examples
    --------
    >>> logarithmic_cost(3.5565, 0.3776, 0.0905, 50.0)
    28791.17
    """
    decades = math.log10(size)
    return float(10.0 ** (k1 + k2 * decades + k3 * decades**2))


def _steam_boiler(heat_w: float, pressure_bar_g: float, _diameter_m: float) -> float:
    purchased = logarithmic_cost(6.9617, -1.4800, 0.3161, heat_w / W_PER_KW)
    return purchased * STEAM_BOILER_BARE_MODULE_FACTOR * steam_boiler_pressure_factor(pressure_bar_g)


def _horizontal_vessel(volume_m3: float, pressure_bar_g: float, diameter_m: float) -> float:
    purchased = logarithmic_cost(3.5565, 0.3776, 0.0905, volume_m3)
    return purchased * (1.49 + 1.52 * vessel_pressure_factor(pressure_bar_g, diameter_m))


def _vertical_vessel(volume_m3: float, pressure_bar_g: float, diameter_m: float) -> float:
    purchased = logarithmic_cost(3.4974, 0.4485, 0.1074, volume_m3)
    return purchased * (2.25 + 1.82 * vessel_pressure_factor(pressure_bar_g, diameter_m))


def _packaged_boiler_2007(steam_kg_s: float, _pressure_bar_g: float, _diameter_m: float) -> float:
    return 106_000.0 + 8.7 * steam_kg_s * SECONDS_PER_HOUR


def _packaged_boiler_2010(steam_kg_s: float, _pressure_bar_g: float, _diameter_m: float) -> float:
    return 124_000.0 + 10.0 * steam_kg_s * SECONDS_PER_HOUR


def _pressure_vessel_by_mass(shell_kg: float, _pressure_bar_g: float, _diameter_m: float) -> float:
    return float(10_200.0 + 31.0 * shell_kg**0.85)


CORRELATIONS: dict[str, Correlation] = {
    correlation.name: correlation
    for correlation in (
        Correlation(
            name="steam boiler by heat output",
            source=f"{TURTON}, Tables A.1, A.2 and A.6",
            confirmed=True,
            basis_date="2001",
            basis_index=397.0,
            size_name="heat output",
            size_unit="W",
            smallest=1.2e6,
            largest=9.4e6,
            lowest_bar_g=0.0,
            highest_bar_g=40.0,
            needs_diameter=False,
            installed=True,
            installation_factor=None,
            cost_usd=_steam_boiler,
        ),
        Correlation(
            name="horizontal vessel by volume",
            source=f"{TURTON}, Tables A.1 and A.4, equation A.2",
            confirmed=True,
            basis_date="2001",
            basis_index=397.0,
            size_name="volume",
            size_unit="m3",
            smallest=0.1,
            largest=628.0,
            lowest_bar_g=0.0,
            highest_bar_g=40.0,
            needs_diameter=True,
            installed=True,
            installation_factor=None,
            cost_usd=_horizontal_vessel,
        ),
        Correlation(
            name="vertical vessel by volume",
            source=f"{TURTON}, Tables A.1 and A.4, equation A.2",
            confirmed=True,
            basis_date="2001",
            basis_index=397.0,
            size_name="volume",
            size_unit="m3",
            smallest=0.3,
            largest=520.0,
            lowest_bar_g=0.0,
            highest_bar_g=40.0,
            needs_diameter=True,
            installed=True,
            installation_factor=None,
            cost_usd=_vertical_vessel,
        ),
        Correlation(
            name="packaged boiler by steam, 2007",
            source=f"{TOWLER}, 1st ed., Table 6.6",
            confirmed=True,
            basis_date="January 2007",
            basis_index=509.7,
            size_name="steam",
            size_unit="kg/s",
            smallest=5_000.0 / SECONDS_PER_HOUR,
            largest=200_000.0 / SECONDS_PER_HOUR,
            lowest_bar_g=15.0,
            highest_bar_g=40.0,
            needs_diameter=False,
            installed=False,
            installation_factor=None,
            cost_usd=_packaged_boiler_2007,
        ),
        Correlation(
            name="packaged boiler by steam, 2010",
            source=f"{TOWLER}, 2nd ed., Table 7.2",
            confirmed=False,
            basis_date="January 2010",
            basis_index=532.9,
            size_name="steam",
            size_unit="kg/s",
            smallest=5_000.0 / SECONDS_PER_HOUR,
            largest=200_000.0 / SECONDS_PER_HOUR,
            lowest_bar_g=15.0,
            highest_bar_g=40.0,
            needs_diameter=False,
            installed=False,
            installation_factor=None,
            cost_usd=_packaged_boiler_2010,
        ),
        Correlation(
            name="pressure vessel by shell mass",
            source=f"{TOWLER}, 2nd ed., Table 7.2",
            confirmed=False,
            basis_date="January 2010",
            basis_index=532.9,
            size_name="shell mass",
            size_unit="kg",
            smallest=160.0,
            largest=50_000.0,
            lowest_bar_g=0.0,
            highest_bar_g=40.0,
            needs_diameter=False,
            installed=False,
            installation_factor=4.0,
            cost_usd=_pressure_vessel_by_mass,
        ),
    )
}
