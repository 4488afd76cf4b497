"""A plant run by its controls over the whole record: construct the pieces, then ``replay``."""

from __future__ import annotations

import datetime as dt
import math

import numpy as np
from numpy.typing import NDArray

from evenfire.accumulator.tables import saturation_table
from evenfire.demand.series import DemandRecord
from evenfire.plant import PlantSpec
from evenfire.replay import kernel
from evenfire.replay.controls import ControlKind, Controls
from evenfire.replay.equipment import BoilerHouse, VesselHouse, boiler_house, vessel_house
from evenfire.replay.results import BoilerRun, ReplayEvent, ReplayResult, Trace
from evenfire.units import SECONDS_PER_DAY

FloatArray = NDArray[np.float64]

LONGEST_STEP_S = 60.0
"""Longer steps of a record are simulated in parts."""
_EVENTS = 10
_SHORTEST_PARTS_PER_BAND = 3.0
_KINDS = {
    ControlKind.PRESSURE_BAND: kernel.BAND,
    ControlKind.SMOOTHED_DEMAND: kernel.SMOOTHED,
    ControlKind.GIVEN: kernel.GIVEN,
}


class Replay:
    """A plant ready to be run over a record; construct once, ``run`` for each setting of its controls.

    Parameters
    ----------
    plant : PlantSpec
    record : DemandRecord
        At the resolution at which it was logged.

    Raises
    ------
    OutOfRangeError
        As :func:`evenfire.replay.equipment.boiler_house` and ``vessel_house``.

    Notes
    -----
    Both phases of the vessel are in equilibrium; all hot boilers share one buffer. A step of the record
    longer than a minute, or long against the boilers' own buffer, is simulated in equal parts of constant
    demand.
    """

    def __init__(self, plant: PlantSpec, record: DemandRecord) -> None:
        self.plant = plant
        self.record = record
        self._boilers: BoilerHouse = boiler_house(plant)
        self._vessel: VesselHouse = vessel_house(plant)
        self._parts = _parts(self._boilers, record.step_s)
        self._weekday = _weekdays(record)

    def run(self, controls: Controls) -> ReplayResult:
        """The plant's run over the record, from half-full boilers and a half-charged vessel."""
        boilers, vessel = self._boilers, self._vessel
        table = saturation_table()
        given = np.zeros((len(boilers.rated_kg_s), 0))
        if controls.given is not None:
            given = controls.given.output_kg_s
        burners, valves = controls.burners, controls.valves
        totals, runs, traces = kernel.run(
            self.record.flow_kg_s,
            self.record.step_s,
            self._parts,
            self._weekday,
            _KINDS[burners.kind],
            burners.smoothing_s,
            burners.level_set,
            burners.gain,
            burners.start_level,
            burners.stop_level,
            burners.stagger,
            valves.surplus,
            valves.hold,
            valves.protect,
            np.array(controls.sequence, dtype=np.int64),
            controls.service,
            given,
            boilers.rated_kg_s,
            boilers.lowest_kg_s,
            boilers.fuel_w,
            boilers.standing_w,
            boilers.standing_kg_s,
            boilers.start_j,
            boilers.cold_start_j,
            boilers.minimum_firing_s,
            boilers.minimum_off_s,
            boilers.ramp_kg_s2,
            boilers.buffer_kg,
            boilers.band_pa,
            boilers.working_pa,
            boilers.least_pa,
            self.plant.conditions.process_pa,
            table.grid,
            table.coefficients,
            vessel.volume_m3,
            vessel.loss_w_per_k,
            vessel.ambient_k,
            vessel.charging_enthalpy_j_kg,
            vessel.make_up_enthalpy_j_kg,
            vessel.level_control_s,
            vessel.charged_pa,
            vessel.discharged_pa,
            vessel.release_kg_s_per_pa,
            vessel.inventory_log_pressure,
            vessel.inventory_kg,
            vessel.start_mass_kg,
            vessel.start_energy_j,
            vessel.start_log_pressure,
        )
        return self._result(totals, runs, traces)

    def _result(self, totals: FloatArray, runs: FloatArray, traces: NDArray[np.float32]) -> ReplayResult:
        record = self.record
        unmet = np.maximum(record.flow_kg_s - traces[0], 0.0)
        unmet[unmet < 1e-6 * record.flow_kg_s] = 0.0
        return ReplayResult(
            duration_s=len(record.flow_kg_s) * record.step_s,
            demand_kg=float(totals[kernel.DEMAND]),
            supplied_kg=float(totals[kernel.SUPPLIED]),
            unmet_kg=float(totals[kernel.UNMET]),
            vented_kg=float(totals[kernel.VENTED]),
            boilers=tuple(
                BoilerRun(
                    name=spec.name,
                    steam_kg=float(row[kernel.RUN_STEAM]),
                    firing_fuel_j=float(row[kernel.RUN_FUEL]),
                    standing_fuel_j=float(row[kernel.RUN_STANDING_J]),
                    start_fuel_j=float(row[kernel.RUN_START_J]),
                    cold_start_fuel_j=float(row[kernel.RUN_COLD_J]),
                    firing_s=float(row[kernel.RUN_FIRING]),
                    hot_s=float(row[kernel.RUN_HOT]),
                    starts=round(float(row[kernel.RUN_STARTS])),
                    cold_starts=round(float(row[kernel.RUN_COLD])),
                )
                for spec, row in zip(self.plant.boilers, runs, strict=True)
            ),
            charged_kg=float(totals[kernel.CHARGED]),
            discharged_kg=float(totals[kernel.DISCHARGED]),
            make_up_kg=float(totals[kernel.MAKE_UP]),
            drain_kg=float(totals[kernel.DRAIN]),
            vessel_loss_j=float(totals[kernel.VESSEL_LOSS_J]),
            lowest_process_pa=float(totals[kernel.LOWEST_PROCESS]),
            lowest_boiler_pa=float(totals[kernel.LOWEST_BOILER]),
            boiler_low_s=float(totals[kernel.BOILER_LOW_S]),
            release_limited_s=float(totals[kernel.RELEASE_LIMITED_S]),
            vessel_empty_s=float(totals[kernel.VESSEL_EMPTY_S]),
            vessel_full_s=float(totals[kernel.VESSEL_FULL_S]),
            mass_closure=_mass_closure(totals),
            energy_closure=_energy_closure(totals),
            events=_events(unmet * record.step_s, traces[4], record.step_s),
            trace=Trace(
                supplied_kg_s=traces[0],
                output_kg_s=traces[6:],
                charge_kg_s=traces[1],
                discharge_kg_s=traces[2],
                boiler_pa=traces[3],
                process_pa=traces[4],
                vessel_pa=traces[5],
            ),
        )


def _parts(boilers: BoilerHouse, step_s: float) -> int:
    """Parts of a step short enough for the minute and for a third of the boilers' own band."""
    band_s = (boilers.buffer_kg / (_SHORTEST_PARTS_PER_BAND * boilers.lowest_kg_s)).min(initial=np.inf)
    return max(1, math.ceil(step_s / min(LONGEST_STEP_S, float(band_s)) - 1e-9))


def _weekdays(record: DemandRecord) -> NDArray[np.int64]:
    """Weekday of each step, Monday 0."""
    midnight = dt.datetime.combine(record.start.date(), dt.time())
    seconds = (record.start.replace(tzinfo=None) - midnight).total_seconds()
    days = np.floor((seconds + np.arange(len(record.flow_kg_s)) * record.step_s) / SECONDS_PER_DAY)
    weekdays: NDArray[np.int64] = (days.astype(np.int64) + record.start.weekday()) % 7
    return weekdays


def _mass_closure(totals: FloatArray) -> float:
    """What header and vessel lack in their books over all steam made and drawn."""
    header = (
        totals[kernel.MADE]
        + totals[kernel.SERVICE]
        - totals[kernel.STANDING]
        - (totals[kernel.SUPPLIED] - totals[kernel.DISCHARGED])
        - totals[kernel.CHARGED]
        - totals[kernel.VENTED]
        - totals[kernel.BUFFER_CHANGE]
    )
    vessel = (
        totals[kernel.CHARGED]
        + totals[kernel.MAKE_UP]
        - totals[kernel.DISCHARGED]
        - totals[kernel.DRAIN]
        - totals[kernel.VESSEL_CHANGE_KG]
    )
    through = totals[kernel.MADE] + totals[kernel.SUPPLIED]
    return float((abs(header) + abs(vessel)) / through) if through else 0.0


def _energy_closure(totals: FloatArray) -> float:
    through = totals[kernel.VESSEL_ENERGY_THROUGH_J]
    return float(abs(totals[kernel.VESSEL_ENERGY_LACK_J]) / through) if through else 0.0


def _events(unmet_kg: FloatArray, process_pa: NDArray[np.float32], step_s: float) -> tuple[ReplayEvent, ...]:
    """Stretches of unmet steam, those within an hour of each other as one, the ten worst."""
    short = np.flatnonzero(unmet_kg > 0.0)
    if not len(short):
        return ()
    breaks = np.flatnonzero(np.diff(short) * step_s > 3600.0)
    firsts = short[np.concatenate([[0], breaks + 1])]
    lasts = short[np.concatenate([breaks, [len(short) - 1]])]
    events = [
        ReplayEvent(
            first_step=int(first),
            last_step=int(last),
            unmet_kg=float(unmet_kg[first : last + 1].sum()),
            lowest_process_pa=float(process_pa[first : last + 1].min()),
        )
        for first, last in zip(firsts, lasts, strict=True)
    ]
    return tuple(sorted(events, key=lambda event: (-event.unmet_kg, event.first_step))[:_EVENTS])
