"""Vessel shape: level and surface against numerical integration and circle geometry."""

import math

import numpy as np
import pytest
from scipy.integrate import quad

from evenfire.accumulator import (
    VesselShape,
    cylinder_thickness_m,
    free_surface_m2,
    level_m,
    liquid_volume_m3,
    shell_mass_kg,
    vessel_shape,
)
from evenfire.errors import OutOfRangeError

SHAPE = VesselShape(diameter_m=2.4, cylinder_length_m=8.0)


@pytest.mark.parametrize("fraction", [0.05, 0.3, 0.5, 0.77, 0.95, 1.0])
def test_volume_is_the_integral_of_the_free_surface(fraction):
    """Liquid volume below a level is the free surface integrated up to it."""
    top = fraction * SHAPE.diameter_m
    integral, _ = quad(lambda level: free_surface_m2(SHAPE, level), 0.0, top, epsrel=1e-10)
    assert liquid_volume_m3(SHAPE, top) == pytest.approx(integral, rel=1e-8)


def test_shape_holds_its_volume():
    """Cylinder plus two ends of D^3 pi / 24 each is the volume asked for, and what a full vessel holds."""
    shape = vessel_shape(40.0, 3.5)
    diameter, length = shape.diameter_m, shape.cylinder_length_m
    assert math.pi * diameter**2 / 4 * length + 2 * math.pi * diameter**3 / 24 == pytest.approx(40.0)
    assert length / diameter == pytest.approx(3.5)
    assert liquid_volume_m3(shape, diameter) == pytest.approx(40.0, rel=1e-12)


def test_surface_is_that_of_revolution():
    """The ends' surface equals a numerical surface of revolution of the half ellipse."""
    radius, depth = SHAPE.diameter_m / 2, SHAPE.diameter_m / 4

    def ring(angle: float) -> float:
        return (
            2
            * math.pi
            * radius
            * math.sin(angle)
            * math.hypot(radius * math.cos(angle), depth * math.sin(angle))
        )

    one_end, _ = quad(ring, 0.0, math.pi / 2)
    assert SHAPE.surface_m2 == pytest.approx(
        math.pi * SHAPE.diameter_m * SHAPE.cylinder_length_m + 2 * one_end
    )


@pytest.mark.parametrize(
    ("fill", "level", "width"),
    [
        (0.90, 0.843524, 0.726611),
        (0.85, 0.792569, 0.810934),
        (0.75, 0.701986, 0.914771),
        (0.60, 0.578868, 0.987481),
    ],
)
def test_long_cylinder_level_and_width(fill, level, width):
    """Without heads, level and surface width at four fills (AS4, pinned by brentq)."""
    shape = vessel_shape(1e6, 1e7)
    assert level_m(shape, fill) / shape.diameter_m == pytest.approx(level, abs=1e-6)
    surface = free_surface_m2(shape, level_m(shape, fill))
    assert surface / shape.cylinder_length_m / shape.diameter_m == pytest.approx(width, abs=2e-6)


def test_surface_is_largest_at_half_fill_and_nothing_at_the_ends():
    """The free surface vanishes at bottom and top and is symmetric about the middle."""
    levels = np.linspace(0.0, SHAPE.diameter_m, 101)
    surfaces = np.array([free_surface_m2(SHAPE, float(level)) for level in levels])
    assert surfaces[0] == surfaces[-1] == 0.0
    assert surfaces.argmax() == 50
    assert surfaces == pytest.approx(surfaces[::-1], abs=1e-6)
    assert level_m(SHAPE, 0.0) == 0.0
    assert level_m(SHAPE, 1.0) == SHAPE.diameter_m


def test_shell_mass_is_steel_between_two_vessels():
    """The mass formula is within 4 % of inside surface times thickness times the density of steel."""
    thickness = 0.02
    inner = SHAPE.surface_m2 * thickness * 7850.0
    assert shell_mass_kg(SHAPE.diameter_m, SHAPE.cylinder_length_m, thickness) == pytest.approx(
        inner, rel=0.04
    )
    assert shell_mass_kg(2.5, 8.5, 0.01936) == pytest.approx(12_630.03, abs=0.005)


def test_refusals():
    """Levels outside the vessel, fills over the brim, walls beyond thin."""
    with pytest.raises(OutOfRangeError, match=r"water level.*\[P123\]"):
        liquid_volume_m3(SHAPE, 2.5)
    with pytest.raises(OutOfRangeError, match=r"water level.*\[P123\]"):
        free_surface_m2(SHAPE, -0.1)
    with pytest.raises(OutOfRangeError, match=r"liquid fill.*between 0 and 1 .*\[P121\]"):
        level_m(SHAPE, 1.1)
    with pytest.raises(OutOfRangeError, match=r"0\.385 of stress.*\[P124\]"):
        cylinder_thickness_m(60e6, 1.0)
    with pytest.raises(OutOfRangeError, match=r"length over diameter.*\[P122\]"):
        vessel_shape(10.0, 0.0)
