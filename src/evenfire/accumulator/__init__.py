"""Accumulator physics: wet, sliding-pressure steam storage."""

from evenfire.accumulator.geometry import (
    VesselShape,
    free_surface_m2,
    level_m,
    liquid_volume_m3,
    vessel_shape,
)
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
    "free_surface_m2",
    "level_m",
    "liquid_volume_m3",
    "pressure_at_stored_kg",
    "shell_mass_kg",
    "steam_capacity_kg",
    "vessel_shape",
    "window_performance",
]
