"""A boiler, a vessel and demands for the replay's tests: round numbers."""

from __future__ import annotations

import datetime as dt

import numpy as np

from evenfire.boiler.fuels import fuel_spec
from evenfire.demand.series import DemandRecord
from evenfire.plant import (
    BoilerSpec,
    PlantSpec,
    SteamConditions,
    VesselRules,
    VesselSpec,
    WindowSpec,
)
from tests.boiler.boilers import FIVE_TONNES

CONDITIONS = SteamConditions(
    process_pa=5.0e5,
    boiler_today_pa=10.0e5,
    feedwater_k=376.15,
    charging_drop_pa=0.5e5,
    discharging_drop_pa=0.6e5,
    ambient_k=293.15,
)
RULES = VesselRules(
    charged_fill=0.9,
    length_to_diameter=3.5,
    release_kg_m2_h_per_bar=220.0,
    heat_loss_w_m2k=0.6,
    make_up_k=376.15,
)


def plant(*boilers: BoilerSpec, volume_m3: float = 0.0) -> PlantSpec:
    """Boilers at 10 bar abs, with a vessel between 9.5 and 5.6 bar abs where a volume is given."""
    window = WindowSpec(charged_pa=9.5e5, discharged_pa=5.6e5)
    return PlantSpec(
        boilers=boilers or (FIVE_TONNES,),
        vessel=VesselSpec(volume_m3=volume_m3, window=window, rules=RULES) if volume_m3 else None,
        boiler_working_pa=10.0e5,
        conditions=CONDITIONS,
        fuel=fuel_spec("natural_gas"),
    )


def record(flow_kg_s: np.ndarray, step_s: float = 60.0) -> DemandRecord:
    """A demand that begins on a Monday."""
    return DemandRecord(
        start=dt.datetime(2026, 2, 2),
        step_s=step_s,
        flow_kg_s=np.asarray(flow_kg_s, dtype=float),
        source="made",
    )
