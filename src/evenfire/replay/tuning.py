"""Tuning of the burners' few settings: learnt on one part of the record, judged on the rest.

Differential evolution (Storn and Price, Journal of Global Optimization 11, 1997) as scipy has it, with a
seed: the cost of a run is not smooth in the settings, so nothing with derivatives would do.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import Bounds, differential_evolution

from evenfire.demand.series import DemandRecord
from evenfire.plant import PlantSpec
from evenfire.replay.controls import BurnerSettings, ControlKind, Controls
from evenfire.replay.results import ReplayResult
from evenfire.replay.simulate import Replay
from evenfire.units import SECONDS_PER_DAY

FloatArray = NDArray[np.float64]

_BOUNDS = [
    (math.log(60.0), math.log(14_400.0)),  # smoothing_s
    (0.1, 1.2),  # level_set
    (math.log(0.1), math.log(8.0)),  # gain
    (0.0, 0.9),  # start_level
    (0.05, 1.0),  # stop_level on its way from start_level to 1
    (0.0, 0.4),  # stagger
]
_PEOPLE_PER_SETTING = 4
_BLOCK_DAYS = 7
_FEWEST_BLOCKS = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class OperatingWeights:
    """What a run is judged by, in any one currency."""

    fuel_per_j: float
    start: FloatArray
    """Wear of one burner start, shape (boilers,)."""
    unmet_per_kg: float

    def cost(self, result: ReplayResult) -> float:
        """Cost of a run."""
        wear = sum(run.starts * float(each) for run, each in zip(result.boilers, self.start, strict=True))
        return self.fuel_per_j * result.fuel_j + wear + self.unmet_per_kg * result.unmet_kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Tuned:
    """Settings found, and what they cost per tonne of demand where they were learnt and where not."""

    controls: Controls
    trials: int
    learnt_cost_per_t: float
    judged_cost_per_t: float


def tuned(
    plant: PlantSpec,
    record: DemandRecord,
    start: Controls,
    weights: OperatingWeights,
    *,
    trials: int,
    seed: int,
) -> Tuned:
    """The settings with the least cost on every other week of a record.

    Parameters
    ----------
    plant : PlantSpec
    record : DemandRecord
        Two halves of days alternate where it is shorter than four weeks.
    start : Controls
        Kind, sequence, service and valves are kept; its settings are among the first trials.
    weights : OperatingWeights
    trials : int
        Runs over the learning part, at least; whole generations are finished.
    seed : int

    Returns
    -------
    Tuned
    """
    learnt, judged = halves(record)
    plant_on = Replay(plant, learnt)
    count = 0

    def cost(x: FloatArray) -> float:
        nonlocal count
        count += 1
        return weights.cost(plant_on.run(_with(start, x)))

    people = _PEOPLE_PER_SETTING * len(_BOUNDS)
    found = differential_evolution(
        cost,
        Bounds(*np.array(_BOUNDS).T),
        maxiter=max(1, trials // people - 1),
        popsize=_PEOPLE_PER_SETTING,
        seed=seed,
        polish=False,
        tol=0.0,
        init="latinhypercube",
        x0=np.clip(_settings(start.burners), *np.array(_BOUNDS).T),
    )
    best = _with(start, found.x)
    at_start = weights.cost(plant_on.run(start))
    controls, learnt_cost = (best, float(found.fun)) if found.fun < at_start else (start, at_start)
    judged_cost = weights.cost(Replay(plant, judged).run(controls))
    return Tuned(
        controls=controls,
        trials=count,
        learnt_cost_per_t=learnt_cost / _tonnes(learnt),
        judged_cost_per_t=judged_cost / _tonnes(judged),
    )


def halves(record: DemandRecord) -> tuple[DemandRecord, DemandRecord]:
    """Odd and even weeks of a record, or odd and even days of one shorter than four weeks.

    The pieces follow each other as if nothing lay between them, so weekdays stay right for whole weeks.
    """
    per_day = round(SECONDS_PER_DAY / record.step_s)
    block = per_day * (_BLOCK_DAYS if record.days >= _FEWEST_BLOCKS * _BLOCK_DAYS else 1)
    number = np.arange(len(record.flow_kg_s)) // block
    odd = record.flow_kg_s[number % 2 == 0]
    even = record.flow_kg_s[number % 2 == 1]
    if not len(even):
        return record, record
    return replace(record, flow_kg_s=odd, gaps=()), replace(record, flow_kg_s=even, gaps=())


def _settings(burners: BurnerSettings) -> FloatArray:
    return np.array(
        [
            np.log(burners.smoothing_s),
            burners.level_set,
            np.log(burners.gain),
            burners.start_level,
            (burners.stop_level - burners.start_level) / (1.0 - burners.start_level),
            burners.stagger,
        ]
    )


def _with(controls: Controls, x: FloatArray) -> Controls:
    """Controls with the settings of one trial, rounded as a person would enter them."""
    kind: ControlKind = controls.burners.kind
    start_level = round(float(x[3]), 2)
    return replace(
        controls,
        burners=BurnerSettings(
            kind=kind,
            smoothing_s=float(round(np.exp(x[0]) / 10.0) * 10.0),
            level_set=round(float(x[1]), 2),
            gain=round(float(np.exp(x[2])), 2),
            start_level=start_level,
            stop_level=round(start_level + float(x[4]) * (1.0 - start_level), 2),
            stagger=round(float(x[5]), 2),
        ),
    )


def _tonnes(record: DemandRecord) -> float:
    return float(record.flow_kg_s.sum()) * record.step_s / 1000.0
