"""An invented boiler that the tests change in one thing at a time."""

from dataclasses import replace
from typing import Any

from evenfire.plant import BoilerSpec, EfficiencyPoint


def points(*pairs: tuple[float, float]) -> tuple[EfficiencyPoint, ...]:
    return tuple(EfficiencyPoint(load_fraction=load, efficiency_lhv=eta) for load, eta in pairs)


FIVE_TONNES = BoilerSpec(
    name="Five",
    rated_kg_s=5.0 / 3.6,
    largest_working_pa=17e5,
    turndown=4.0,
    efficiency_points=points((0.25, 0.89), (0.50, 0.91), (0.75, 0.913), (1.0, 0.906)),
    efficiency_at_pa=10e5,
    standing_loss_w=28e3,
    purge_energy_j=20e6,
    buffer_kg=60.0,
    burner_band_pa=1.0e5,
    minimum_firing_s=600.0,
    minimum_off_s=0.0,
    cold_start_s=2700.0,
    cold_start_energy_j=6e9,
    ramp_kg_s2=0.01,
    blowdown_fraction=0.04,
    stack_slope_per_k=4.567e-4,
)


def boiler(**changes: Any) -> BoilerSpec:
    return replace(FIVE_TONNES, **changes)
