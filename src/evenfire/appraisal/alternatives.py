"""The alternatives: what each may choose. A new alternative is one more entry in ``RULES``."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from evenfire.plan.inputs import AlternativeRules, PlanInputs, VesselUse


def _names(inputs: PlanInputs, *, existing: bool) -> frozenset[str]:
    return frozenset(boiler.name for boiler in inputs.boilers if boiler.existing is existing)


def _as_is(inputs: PlanInputs) -> AlternativeRules:
    """Today's boilers, whatever they fail to supply."""
    today = _names(inputs, existing=True)
    return AlternativeRules(
        name="as is",
        required=today,
        allowed=today,
        fewest_new=0,
        most_new=0,
        vessel=VesselUse.NONE,
        adequate=False,
    )


def _staggered_starts(inputs: PlanInputs) -> AlternativeRules:
    """Today's boilers for a demand with shifted batch starts, of which the inputs must be made."""
    return replace(_as_is(inputs), name="staggered starts")


def _bigger_boiler(inputs: PlanInputs) -> AlternativeRules:
    """A larger boiler in place of the largest one; the others may stay or go."""
    today = [boiler for boiler in inputs.boilers if boiler.existing]
    largest = max(today, key=lambda boiler: boiler.rated_t_h)
    larger = {x.name for x in inputs.boilers if not x.existing and x.rated_t_h > largest.rated_t_h}
    others = {boiler.name for boiler in today if boiler is not largest}
    return AlternativeRules(
        name="bigger boiler",
        required=frozenset(),
        allowed=frozenset(larger | others),
        fewest_new=1,
        most_new=1,
        vessel=VesselUse.NONE,
        adequate=True,
    )


def _further_boiler(inputs: PlanInputs) -> AlternativeRules:
    """Today's boilers and one more."""
    today = _names(inputs, existing=True)
    return AlternativeRules(
        name="further boiler",
        required=today,
        allowed=today | _names(inputs, existing=False),
        fewest_new=1,
        most_new=1,
        vessel=VesselUse.NONE,
        adequate=True,
    )


def _storage(inputs: PlanInputs) -> AlternativeRules:
    """Today's boilers and an accumulator."""
    today = _names(inputs, existing=True)
    return AlternativeRules(
        name="storage",
        required=today,
        allowed=today,
        fewest_new=0,
        most_new=0,
        vessel=VesselUse.REQUIRED,
        adequate=True,
    )


def _free_choice(inputs: PlanInputs) -> AlternativeRules:
    """Any of today's boilers, at most one new one, with or without an accumulator."""
    return AlternativeRules(
        name="free choice",
        required=frozenset(),
        allowed=frozenset(boiler.name for boiler in inputs.boilers),
        fewest_new=0,
        most_new=1,
        vessel=VesselUse.OPTIONAL,
        adequate=True,
    )


RULES: dict[str, Callable[[PlanInputs], AlternativeRules]] = {
    "as is": _as_is,
    "staggered starts": _staggered_starts,
    "bigger boiler": _bigger_boiler,
    "further boiler": _further_boiler,
    "storage": _storage,
    "free choice": _free_choice,
}
