"""Wall thickness and shell mass by the thin-wall code formula: an estimate for cost only."""

from __future__ import annotations

import math

from evenfire.errors import OutOfRangeError, Problem

STEEL_DENSITY_KG_M3 = 7850.0
ALLOWABLE_STRESS_PA = 138.0e6
"""Carbon steel plate at vessel temperature; an input of the estimate, not a material certificate."""
JOINT_EFFICIENCY = 0.85
CORROSION_ALLOWANCE_M = 1.0e-3
LARGEST_PRESSURE_OVER_STRESS = 0.385


def cylinder_thickness_m(
    pressure_gauge_pa: float,
    inside_radius_m: float,
    allowable_stress_pa: float = ALLOWABLE_STRESS_PA,
    joint_efficiency: float = JOINT_EFFICIENCY,
) -> float:
    """Thickness of a cylindrical shell under internal pressure, without corrosion allowance [m].

    t = P R / (S E - 0.6 P).

    Raises
    ------
    OutOfRangeError
        P124 where P exceeds 0.385 S E, beyond which the thin-wall formula does not hold, or is not above 0.

    References
    ----------
    ASME Boiler and Pressure Vessel Code VIII-1, UG-27(c)(1).

    Examples
    --------
    >>> round(cylinder_thickness_m(1.8e6, 1.25) * 1000, 6)
    19.359835
    """
    strength = allowable_stress_pa * joint_efficiency
    if not 0.0 < pressure_gauge_pa <= LARGEST_PRESSURE_OVER_STRESS * strength:
        raise OutOfRangeError(
            Problem(
                code="P124",
                where="vessel pressure for the wall thickness",
                found=f"found {pressure_gauge_pa:g} Pa gauge",
                allowed=(
                    f"must lie above 0 and not above 0.385 of stress times joint efficiency, "
                    f"{LARGEST_PRESSURE_OVER_STRESS * strength:g} Pa"
                ),
            )
        )
    return pressure_gauge_pa * inside_radius_m / (strength - 0.6 * pressure_gauge_pa)


def shell_mass_kg(diameter_m: float, cylinder_length_m: float, wall_thickness_m: float) -> float:
    """Mass of shell and two 2:1 ellipsoidal ends [kg]: pi (D + t)(L + 0.8 D) t rho.

    References
    ----------
    Seider et al., Product and Process Design Principles (from memory).

    Examples
    --------
    >>> round(shell_mass_kg(2.5, 8.5, 0.01936), 2)
    12630.03
    """
    return (
        math.pi
        * (diameter_m + wall_thickness_m)
        * (cylinder_length_m + 0.8 * diameter_m)
        * wall_thickness_m
        * STEEL_DENSITY_KG_M3
    )
