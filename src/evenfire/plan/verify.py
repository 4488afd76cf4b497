"""The arbiter: a plan put into the Pyomo model and judged there, row by row."""

from __future__ import annotations

from dataclasses import dataclass, replace

from pyomo.common.gc_manager import PauseGC

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import AlternativeRules, PlanInputs, VesselUse
from evenfire.plan.model import alternative_model
from evenfire.plan.outcome import Plan
from evenfire.plan.translate import assign


@dataclass(frozen=True, slots=True, kw_only=True)
class Judgement:
    """What the mixed-integer model says of a plan."""

    cost_k: float
    largest_violation: float
    """Of any row, bound or integrality, in model units."""


def judged(inputs: PlanInputs, rules: AlternativeRules, plan: Plan) -> Judgement:
    """Cost and feasibility of a plan in the model of its alternative.

    Boilers and vessel segments the plan does not use are left out of the model; with their binaries at
    zero they would add nothing to any row.
    """
    kept = () if plan.segment is None else (inputs.vessel_segments[plan.segment],)
    own = replace(
        inputs,
        boilers=tuple(boiler for boiler in inputs.boilers if boiler.name in plan.boilers),
        vessel_segments=kept,
    )
    own_rules = replace(
        rules,
        allowed=frozenset(plan.boilers),
        vessel=VesselUse.NONE if plan.segment is None else VesselUse.REQUIRED,
    )
    with PauseGC():
        model = alternative_model(own, own_rules)
        assign(model, own, plan if plan.segment is None else replace(plan, segment=0))
        arrays = compiled(model)
    point = arrays.values()
    return Judgement(cost_k=arrays.objective(point), largest_violation=arrays.largest_violation(point))
