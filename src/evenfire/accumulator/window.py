"""What a vessel of a given volume does in a given pressure window."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
import numpy.typing as npt

from evenfire.accumulator.geometry import free_surface_m2, level_m, vessel_shape
from evenfire.accumulator.shell import (
    ALLOWABLE_STRESS_PA,
    CORROSION_ALLOWANCE_M,
    JOINT_EFFICIENCY,
    cylinder_thickness_m,
    shell_mass_kg,
)
from evenfire.errors import OutOfRangeError, Problem, out_of_range
from evenfire.plant import VesselRules, WindowSpec
from evenfire.units import ATMOSPHERE_PA, PA_PER_BAR, SECONDS_PER_HOUR, bar_abs_to_pa
from evenfire.water import flash_steam_kg_m3, liquid_enthalpy_j_kg, saturation

FloatArray = npt.NDArray[np.float64]

SMALLEST_WINDOW_PA = 1.0e5
LARGEST_WINDOW_PA = 200.0e5
LARGEST_CHARGED_FILL = 0.95
"""At least 5 % steam space at the charged state (German trade press 2017: "up to 95 % hot water")."""


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowPerformance:
    """What one vessel does between its charged and discharged state."""

    volume_m3: float
    window: WindowSpec
    steam_capacity_kg: float
    """Steam given from charged to discharged pressure [kg]."""
    taken_up_kg: float
    """Steam taken up from discharged back to the same charged state, make-up water heated too [kg]."""
    make_up_kg: float
    """Water per full cycle that keeps the inventory [kg]: positive make-up, negative drain."""
    discharge_per_charge: float
    """Dischargeable steam gained per steam charged [kg/kg]."""
    release_limit_kg_s: float
    """Largest release of dry steam from the free surface at the discharged state [kg/s]."""
    standing_loss_w: float
    """Heat through the insulated surface at the charged temperature [W]."""
    standing_loss_kg_s: float
    """Dischargeable steam lost through it [kg/s]."""
    diameter_m: float
    cylinder_length_m: float
    surface_m2: float
    wall_thickness_m: float
    """Corrosion allowance of 1 mm included; an estimate for cost only [m]."""
    shell_mass_kg: float
    """An estimate for cost only [kg]."""
    fill_charged: float
    fill_discharged: float
    level_fraction_charged: float
    """Water level over diameter [1]."""
    level_fraction_discharged: float
    free_surface_discharged_m2: float
    curve_pressure_pa: FloatArray
    """Vessel pressure from charged down to discharged [Pa]."""
    curve_stored_kg: FloatArray
    """Dischargeable steam at each of those pressures [kg]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Cycle:
    """One cycle per cubic metre of vessel."""

    pressure_pa: FloatArray
    stored_kg_m3: FloatArray
    taken_up_kg_m3: float
    fill_discharged: float
    charged_k: float
    charged_liquid_enthalpy_j_kg: float


def window_performance(
    volume_m3: float,
    window: WindowSpec,
    rules: VesselRules,
    charging_enthalpy_j_kg: float,
    ambient_k: float,
    allowable_stress_pa: float = ALLOWABLE_STRESS_PA,
    joint_efficiency: float = JOINT_EFFICIENCY,
) -> WindowPerformance:
    """Steam capacity, limits, losses and dimensions of one vessel in one pressure window.

    Capacity: the balance dU = h'' dm of the whole vessel, integrated from the charged state
    (:func:`evenfire.water.flash_steam_kg_m3`). It is exactly proportional to the volume.

    Recharging: steam S at h_in and make-up water W at h_w bring the vessel from the discharged state
    (m2, U2) back to the charged state (m1, U1):

        S + W = m1 - m2,    S h_in + W h_w = U1 - U2,
        S = (U1 - U2 - h_w (m1 - m2)) / (h_in - h_w).

    If W comes out negative, water is drained at charged pressure instead and h_w is h'(p_charged).
    ``discharge_per_charge`` is (m1 - m2) / S. It is slightly above 1 where steam enters richer than it
    leaves: the surplus heat evaporates the make-up water W.

    Standing loss: heat lost condenses steam that must be drained and recharged,
    Q / (h_in - h'(p_charged)) of charging steam; ``standing_loss_kg_s`` is that times
    ``discharge_per_charge``.

    Parameters
    ----------
    volume_m3 : float
        Vessel volume, ends included [m3].
    window : WindowSpec
        Charged and discharged absolute pressure [Pa], 1 to 200 bar.
    rules : VesselRules
    charging_enthalpy_j_kg : float
        Enthalpy of the charging steam [J/kg], that of the boiler's steam.
    ambient_k : float
        Temperature around the vessel [K].
    allowable_stress_pa, joint_efficiency : float
        For the wall thickness estimate [Pa], [1].

    Returns
    -------
    WindowPerformance

    Raises
    ------
    OutOfRangeError
        P120 for a window that is not falling or leaves 1 to 200 bar absolute; P121 for a charged fill outside
        (0, 0.95] (above it, charging would flood the vessel); P122 for a volume or shape not above 0; P124
        for a wall beyond the formula; P125 for charging steam not richer than the boiling water it must heat;
        P127 for a negative heat loss coefficient or release limit.

    Notes
    -----
    Mass and energy close exactly over full cycles. At one pressure inside the window the coefficient is
    (h_in - h_w)/(h''(p) - h_w), so a vessel that moves only in the upper part needs up to 0.5 % more charging
    steam than the full cycle's mean, in the lower part as much less.

    The standing loss stands apart from make-up, as if its condensate were always drained. Where make-up is
    due the same condensate replaces it, and less steam is needed than the two coefficients say, by at most
    1 - (h_in - h')/(h_in - h_w) of the standing loss, a quarter to a third: safe side. The loss is taken at
    the charged temperature throughout (upper bound).

    Examples
    --------
    >>> rules = VesselRules(charged_fill=0.9, length_to_diameter=3.5, release_kg_m2_h_per_bar=220.0,
    ...                     heat_loss_w_m2k=0.6, make_up_k=293.15)
    >>> window = WindowSpec(charged_pa=10e5, discharged_pa=5e5)
    >>> vessel = window_performance(40.0, window, rules, 2780.667e3, 293.15)
    >>> round(vessel.steam_capacity_kg, 1), round(vessel.make_up_kg, 1), round(vessel.fill_discharged, 3)
    (1834.8, 11.6, 0.822)
    """
    _check_rules(rules)
    shape = vessel_shape(volume_m3, rules.length_to_diameter)
    cycle = _cycle(
        window.charged_pa, window.discharged_pa, rules.charged_fill, charging_enthalpy_j_kg, rules.make_up_k
    )
    capacity_kg = float(cycle.stored_kg_m3[0]) * volume_m3
    taken_up_kg = cycle.taken_up_kg_m3 * volume_m3
    discharge_per_charge = capacity_kg / taken_up_kg
    level_charged = level_m(shape, rules.charged_fill)
    level_discharged = level_m(shape, cycle.fill_discharged)
    free_surface = free_surface_m2(shape, level_discharged)
    loss_w = rules.heat_loss_w_m2k * shape.surface_m2 * max(cycle.charged_k - ambient_k, 0.0)
    wall_m = CORROSION_ALLOWANCE_M + cylinder_thickness_m(
        window.charged_pa - ATMOSPHERE_PA, shape.diameter_m / 2.0, allowable_stress_pa, joint_efficiency
    )
    return WindowPerformance(
        volume_m3=volume_m3,
        window=window,
        steam_capacity_kg=capacity_kg,
        taken_up_kg=taken_up_kg,
        make_up_kg=capacity_kg - taken_up_kg,
        discharge_per_charge=discharge_per_charge,
        release_limit_kg_s=(
            rules.release_kg_m2_h_per_bar
            * (window.discharged_pa / PA_PER_BAR)
            * free_surface
            / SECONDS_PER_HOUR
        ),
        standing_loss_w=loss_w,
        standing_loss_kg_s=(
            discharge_per_charge * loss_w / (charging_enthalpy_j_kg - cycle.charged_liquid_enthalpy_j_kg)
        ),
        diameter_m=shape.diameter_m,
        cylinder_length_m=shape.cylinder_length_m,
        surface_m2=shape.surface_m2,
        wall_thickness_m=wall_m,
        shell_mass_kg=shell_mass_kg(shape.diameter_m, shape.cylinder_length_m, wall_m),
        fill_charged=rules.charged_fill,
        fill_discharged=cycle.fill_discharged,
        level_fraction_charged=level_charged / shape.diameter_m,
        level_fraction_discharged=level_discharged / shape.diameter_m,
        free_surface_discharged_m2=free_surface,
        curve_pressure_pa=cycle.pressure_pa,
        curve_stored_kg=cycle.stored_kg_m3 * volume_m3,
    )


def pressure_at_stored_kg(performance: WindowPerformance, stored_kg: npt.ArrayLike) -> FloatArray:
    """Vessel pressure at a given dischargeable steam [Pa], on the discharge line.

    Raises
    ------
    OutOfRangeError
        P128 for an amount outside 0 to the steam capacity (by more than 1e-6 of it).
    """
    stored = np.asarray(stored_kg, dtype=np.float64)
    slack = 1.0e-6 * performance.steam_capacity_kg
    inside = (stored >= -slack) & (stored <= performance.steam_capacity_kg + slack)
    if not inside.all():
        worst = float(stored[~inside].flat[0]) if stored.ndim else float(stored)
        raise out_of_range("P128", "stored steam", worst, "kg", 0.0, performance.steam_capacity_kg)
    return np.asarray(
        np.interp(stored, performance.curve_stored_kg[::-1], performance.curve_pressure_pa[::-1])
    )


def steam_capacity_kg(
    volume_m3: float, charged_bar_abs: float, discharged_bar_abs: float, fill: float = 0.9
) -> float:
    """Steam a vessel gives from charged to discharged pressure [kg], in trade units.

    Parameters
    ----------
    volume_m3 : float
        Vessel volume [m3].
    charged_bar_abs, discharged_bar_abs : float
        Absolute pressures [bar], 1 to 200.
    fill : float
        Liquid volume fraction at the charged state [1], above 0 and at most 0.95.

    Raises
    ------
    OutOfRangeError
        P120, P121, P122 as :func:`window_performance`.

    Examples
    --------
    >>> round(steam_capacity_kg(1.0, 10.0, 5.0), 4)
    45.8708
    """
    if not 0.0 < volume_m3 < np.inf:
        raise out_of_range("P122", "vessel volume", volume_m3, "m3", 0.0, np.inf)
    charged_pa, discharged_pa = bar_abs_to_pa(charged_bar_abs), bar_abs_to_pa(discharged_bar_abs)
    _check_window(charged_pa, discharged_pa)
    _check_fill(fill)
    _, mass = flash_steam_kg_m3(charged_pa, discharged_pa, fill)
    return volume_m3 * float(mass[0] - mass[-1])


@lru_cache(maxsize=512)
def _cycle(
    charged_pa: float, discharged_pa: float, fill: float, charging_enthalpy_j_kg: float, make_up_k: float
) -> _Cycle:
    _check_window(charged_pa, discharged_pa)
    _check_fill(fill)
    pressure, mass = flash_steam_kg_m3(charged_pa, discharged_pa, fill)
    at = saturation(np.array([charged_pa, discharged_pa]))
    fill_discharged = _discharged_fill(discharged_pa, float(mass[-1]))
    fills = np.array([fill, fill_discharged])
    energy = (
        fills * at.density_liquid_kg_m3 * at.internal_energy_liquid_j_kg
        + (1.0 - fills) * at.density_vapour_kg_m3 * at.internal_energy_vapour_j_kg
    )
    liquid = float(at.enthalpy_liquid_j_kg[0])
    if not charging_enthalpy_j_kg > liquid:
        raise OutOfRangeError(
            Problem(
                code="P125",
                where="charging steam",
                found=f"found {charging_enthalpy_j_kg:g} J/kg",
                allowed=f"must exceed that of boiling water at charged pressure, {liquid:g} J/kg",
            )
        )
    gain_j, gain_kg = float(energy[0] - energy[1]), float(mass[0] - mass[-1])
    water = float(liquid_enthalpy_j_kg(make_up_k, charged_pa))
    taken_up = (gain_j - water * gain_kg) / (charging_enthalpy_j_kg - water)
    if taken_up > gain_kg:
        taken_up = (gain_j - liquid * gain_kg) / (charging_enthalpy_j_kg - liquid)
    return _Cycle(
        pressure_pa=pressure,
        stored_kg_m3=mass - mass[-1],
        taken_up_kg_m3=taken_up,
        fill_discharged=fill_discharged,
        charged_k=float(at.temperature_k[0]),
        charged_liquid_enthalpy_j_kg=liquid,
    )


def _discharged_fill(discharged_pa: float, mass_kg_m3: float) -> float:
    at = saturation(discharged_pa)
    vapour, liquid = float(at.density_vapour_kg_m3), float(at.density_liquid_kg_m3)
    return (mass_kg_m3 - vapour) / (liquid - vapour)


def _check_window(charged_pa: float, discharged_pa: float) -> None:
    for name, pressure in (("charged pressure", charged_pa), ("discharged pressure", discharged_pa)):
        if not SMALLEST_WINDOW_PA <= pressure <= LARGEST_WINDOW_PA:
            raise out_of_range(
                "P120", name, pressure / PA_PER_BAR, "bar abs", SMALLEST_WINDOW_PA / PA_PER_BAR, 200.0
            )
    if not charged_pa > discharged_pa:
        raise OutOfRangeError(
            Problem(
                code="P120",
                where="pressure window",
                found=f"found {charged_pa / PA_PER_BAR:g} to {discharged_pa / PA_PER_BAR:g} bar abs",
                allowed="the charged pressure must exceed the discharged pressure",
            )
        )


def _check_fill(fill: float) -> None:
    if not 0.0 < fill <= LARGEST_CHARGED_FILL:
        raise OutOfRangeError(
            Problem(
                code="P121",
                where="liquid fill at the charged state",
                found=f"found {fill:.4g} of the volume",
                allowed=(
                    f"must lie above 0 and not above {LARGEST_CHARGED_FILL:g}: charging raises the level, "
                    "and a vessel without steam space floods"
                ),
            )
        )


def _check_rules(rules: VesselRules) -> None:
    _check_fill(rules.charged_fill)
    if not 0.0 <= rules.heat_loss_w_m2k < np.inf:
        raise out_of_range("P127", "heat loss coefficient", rules.heat_loss_w_m2k, "W/(m2 K)", 0.0, np.inf)
    if not 0.0 < rules.release_kg_m2_h_per_bar < np.inf:
        raise out_of_range(
            "P127", "release limit", rules.release_kg_m2_h_per_bar, "kg/(m2 h bar)", 0.0, np.inf
        )
