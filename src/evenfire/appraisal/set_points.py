"""The settings of a replayed plant as lines that a controls contractor can read."""

from __future__ import annotations

from evenfire.appraisal.results import SetPoint
from evenfire.plant import PlantSpec
from evenfire.replay.controls import ControlKind, Controls
from evenfire.units import pa_to_bar_g

DISCHARGE_VALVE_BELOW_PA = 0.2e5
"""How far below the reducing valve the discharge valve is set, so that they do not work at once."""


def set_points(plant: PlantSpec, controls: Controls) -> tuple[SetPoint, ...]:
    """Valve set-points, burner settings, sequence and alarms.

    Parameters
    ----------
    plant : PlantSpec
    controls : Controls
        Of the replay that the figures come from.

    Notes
    -----
    A starting point for commissioning on the plant as it is built, not a release for operation.
    """
    rows: list[SetPoint] = []

    def row(name: str, value: str, unit: str, purpose: str) -> None:
        rows.append(SetPoint(name=name, value=value, unit=unit, purpose=purpose))

    site, vessel, burners = plant.conditions, plant.vessel, controls.burners
    row("reducing valve", _bar_g(site.process_pa), "bar g", "holds the process pressure from the boilers")
    if vessel is not None:
        row(
            "discharge valve",
            _bar_g(site.process_pa - DISCHARGE_VALVE_BELOW_PA),
            "bar g",
            "holds the process pressure from the vessel once the boilers alone cannot",
        )
        row(
            "surplus valve",
            _boiler_bar_g(plant, controls.valves.surplus),
            "bar g",
            "passes boiler steam into the vessel above this boiler pressure",
        )
        row(
            "reducing valve closes below",
            _boiler_bar_g(plant, controls.valves.hold),
            "bar g",
            "boiler pressure at which the vessel takes over the peak",
        )
        row("vessel charged", _bar_g(vessel.window.charged_pa), "bar g", "charging ends")
        row("vessel discharged", _bar_g(vessel.window.discharged_pa), "bar g", "discharging ends")
    row(
        "steam to the process throttled below",
        _boiler_bar_g(plant, controls.valves.protect),
        "bar g",
        "boiler pressure kept, so that no water is carried over",
    )
    level = "vessel" if vessel is not None else "boiler"
    for place, b in enumerate(controls.sequence):
        name = plant.boilers[b].name
        lower = burners.stagger * place
        row(
            f"{name}: burner on below",
            _level(plant, burners.start_level - lower),
            "bar g",
            f"{level} pressure; place {place + 1} in the sequence",
        )
        row(
            f"{name}: burner off above",
            _level(plant, burners.stop_level - lower),
            "bar g",
            f"{level} pressure; boiler cut-out pressure puts it out in any case",
        )
    row("firing controller: set-point", _level(plant, burners.level_set), "bar g", f"{level} pressure")
    row(
        "firing controller: gain",
        f"{100.0 * burners.gain:.0f}",
        "% of rating per band",
        f"firing added over the whole {level} pressure band",
    )
    if burners.kind is ControlKind.SMOOTHED_DEMAND:
        row(
            "steam meter: smoothing",
            f"{burners.smoothing_s / 60.0:.1f}",
            "min",
            "time constant of the flow that firing follows",
        )
    row("alarm: process pressure low", _bar_g(0.95 * site.process_pa), "bar g", "95 % of it, absolute")
    row(
        "alarm: boiler pressure low",
        _boiler_bar_g(plant, -0.5),
        "bar g",
        "half a band below cut-in: danger of carry-over",
    )
    return tuple(rows)


def _bar_g(pressure_pa: float) -> str:
    return f"{pa_to_bar_g(pressure_pa):.2f}"


def _boiler_bar_g(plant: PlantSpec, level: float) -> str:
    """Pressure at a place in the boilers' band; the narrowest band where they differ."""
    band_pa = min(boiler.burner_band_pa for boiler in plant.boilers)
    return _bar_g(plant.boiler_working_pa + (level - 0.5) * band_pa)


def _level(plant: PlantSpec, level: float) -> str:
    """Pressure at a place in the band that the burners go by."""
    if plant.vessel is None:
        return _boiler_bar_g(plant, level)
    window = plant.vessel.window
    return _bar_g(window.discharged_pa + level * (window.charged_pa - window.discharged_pa))
