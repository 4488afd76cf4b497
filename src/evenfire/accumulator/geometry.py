"""Horizontal cylinder with 2:1 ellipsoidal ends: size, level, free water surface."""

from __future__ import annotations

import math
from dataclasses import dataclass

from scipy.optimize import brentq

from evenfire.errors import out_of_range

END_DEPTH_OVER_DIAMETER = 0.25
"""Depth of a 2:1 ellipsoidal end."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselShape:
    """Inside dimensions of a horizontal vessel with 2:1 ellipsoidal ends."""

    diameter_m: float
    cylinder_length_m: float

    @property
    def volume_m3(self) -> float:
        """pi D^2 L / 4 + pi D^3 / 12 (both ends together) [m3]."""
        return math.pi * self.diameter_m**2 * (self.cylinder_length_m / 4.0 + self.diameter_m / 12.0)

    @property
    def surface_m2(self) -> float:
        """Whole inside surface [m2]: pi D L and two half spheroids of semi-axes D/2, D/2, D/4."""
        eccentricity = math.sqrt(1.0 - (2.0 * END_DEPTH_OVER_DIAMETER) ** 2)
        ends = (
            0.5
            * math.pi
            * self.diameter_m**2
            * (1.0 + (1.0 - eccentricity**2) / eccentricity * math.atanh(eccentricity))
        )
        return math.pi * self.diameter_m * self.cylinder_length_m + ends


def vessel_shape(volume_m3: float, length_to_diameter: float) -> VesselShape:
    """The vessel of a volume (ends included) and a ratio of cylindrical length to diameter.

    D = (V / (pi (lambda / 4 + 1 / 12)))^(1/3).

    Raises
    ------
    OutOfRangeError
        P122 for a volume or a ratio not above 0.

    Examples
    --------
    >>> shape = vessel_shape(40.0, 3.5)
    >>> round(shape.diameter_m, 3), round(shape.cylinder_length_m, 3), round(shape.volume_m3, 9)
    (2.368, 8.29, 40.0)
    """
    if not 0.0 < volume_m3 < math.inf:
        raise out_of_range("P122", "vessel volume", volume_m3, "m3", 0.0, math.inf)
    if not 0.0 < length_to_diameter < math.inf:
        raise out_of_range("P122", "vessel length over diameter", length_to_diameter, "", 0.0, math.inf)
    diameter = (volume_m3 / (math.pi * (length_to_diameter / 4.0 + 1.0 / 12.0))) ** (1.0 / 3.0)
    return VesselShape(diameter_m=diameter, cylinder_length_m=length_to_diameter * diameter)


def liquid_volume_m3(shape: VesselShape, level_m: float) -> float:
    """Volume below a level measured from the bottom [m3].

    Cylinder segment R^2 acos((R-y)/R) - (R-y) sqrt(2Ry - y^2) times L, and the spherical cap
    pi y^2 (3R - y) / 3 of radius R flattened to half its depth for the two ends together.

    Raises
    ------
    OutOfRangeError
        P123 for a level outside 0 to the diameter.
    """
    if not 0.0 <= level_m <= shape.diameter_m:
        raise out_of_range("P123", "water level", level_m, "m", 0.0, shape.diameter_m)
    radius = shape.diameter_m / 2.0
    below = radius - level_m
    segment = radius**2 * math.acos(below / radius) - below * math.sqrt(max(radius**2 - below**2, 0.0))
    ends = 2.0 * END_DEPTH_OVER_DIAMETER * math.pi * level_m**2 * (3.0 * radius - level_m) / 3.0
    return segment * shape.cylinder_length_m + ends


def level_m(shape: VesselShape, liquid_fill: float) -> float:
    """Height of the water above the bottom [m] when it fills a fraction of the volume [1].

    Raises
    ------
    OutOfRangeError
        P121 for a fill outside 0 to 1.

    Examples
    --------
    >>> round(level_m(vessel_shape(40.0, 3.5), 0.5) / vessel_shape(40.0, 3.5).diameter_m, 9)
    0.5
    """
    if not 0.0 <= liquid_fill <= 1.0:
        raise out_of_range("P121", "liquid fill", liquid_fill, "", 0.0, 1.0)
    if liquid_fill in (0.0, 1.0):
        return liquid_fill * shape.diameter_m
    wanted = liquid_fill * shape.volume_m3
    return float(brentq(lambda level: liquid_volume_m3(shape, level) - wanted, 0.0, shape.diameter_m))


def free_surface_m2(shape: VesselShape, level_m: float) -> float:
    """Water surface at a level [m2]: width w = 2 sqrt(y (D - y)), w L + pi w^2 / 8 (both ends).

    Raises
    ------
    OutOfRangeError
        P123 for a level outside 0 to the diameter.

    Examples
    --------
    >>> shape = VesselShape(diameter_m=2.0, cylinder_length_m=7.0)
    >>> round(free_surface_m2(shape, 1.0), 4)
    15.5708
    """
    if not 0.0 <= level_m <= shape.diameter_m:
        raise out_of_range("P123", "water level", level_m, "m", 0.0, shape.diameter_m)
    width = 2.0 * math.sqrt(level_m * (shape.diameter_m - level_m))
    return width * shape.cylinder_length_m + math.pi * END_DEPTH_OVER_DIAMETER * width**2 / 2.0
