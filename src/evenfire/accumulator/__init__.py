"""Accumulator physics: wet, sliding-pressure steam storage.

The vessel simulator and its compiled functions live in :mod:`evenfire.accumulator.vessel`,
:mod:`evenfire.accumulator.balance` and :mod:`evenfire.accumulator.tables`; import them from there, so that
what needs no compiled code does not load numba.
"""

from evenfire.accumulator.geometry import (
    VesselShape,
    free_surface_m2,
    level_m,
    liquid_volume_m3,
    vessel_shape,
)
from evenfire.accumulator.level import fill_after_charging, largest_fill_before_charging
from evenfire.accumulator.shell import cylinder_thickness_m, shell_mass_kg
from evenfire.accumulator.window import (
    WindowPerformance,
    pressure_at_stored_kg,
    steam_capacity_kg,
    window_performance,
)

__all__ = [
    "VesselShape",
    "WindowPerformance",
    "cylinder_thickness_m",
    "fill_after_charging",
    "free_surface_m2",
    "largest_fill_before_charging",
    "level_m",
    "liquid_volume_m3",
    "pressure_at_stored_kg",
    "shell_mass_kg",
    "steam_capacity_kg",
    "vessel_shape",
    "window_performance",
]
