"""The demand that alternatives are planned on: the case's own, or one with shifted batch starts."""

from __future__ import annotations

from dataclasses import dataclass

from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import chosen_days
from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.staggering import NAME, stagger_notice, staggering
from evenfire.appraisal.vessels import WindowTable
from evenfire.case.case import Case
from evenfire.demand.enough_days import EnoughDays
from evenfire.demand.series import DemandRecord, StorageNeed
from evenfire.demand.storage_need import storage_need
from evenfire.errors import Notice
from evenfire.plan.inputs import PlanInputs


@dataclass(frozen=True, slots=True, kw_only=True)
class Basis:
    """A demand and what the plan takes from it."""

    record: DemandRecord
    need: StorageNeed
    chosen: EnoughDays
    inputs: PlanInputs


@dataclass(frozen=True, slots=True, kw_only=True)
class Bases:
    """What each alternative of a case is planned on."""

    usual: Basis
    staggered: Basis | None
    """None where the case does not ask for staggered starts, or no starts within their limits work."""
    notices: tuple[Notice, ...]

    def of(self, alternative: str) -> Basis | None:
        """The basis of an alternative, None where it has none."""
        return self.staggered if alternative == NAME else self.usual


def case_bases(case: Case, tables: tuple[WindowTable, ...]) -> Bases:
    """The bases of all alternatives that a case asks for.

    Raises
    ------
    RecordError
        If the record cannot be used.
    """
    usual = basis(case, case_record(case), tables)
    if NAME not in case.plan.alternatives:
        return Bases(usual=usual, staggered=None, notices=())
    found = staggering(case)
    if found is None:
        text = f"{NAME}: no starts within the stated limits leave every batch a unit of its resource"
        return Bases(
            usual=usual, staggered=None, notices=(Notice(code="N204", text=text, severity="warning"),)
        )
    return Bases(
        usual=usual,
        staggered=basis(case, found.record, tables),
        notices=(stagger_notice(found, usual.record),),
    )


def basis(case: Case, record: DemandRecord, tables: tuple[WindowTable, ...]) -> Basis:
    """What the plan takes from one record."""
    need = storage_need(record.flow_kg_s, record.step_s)
    chosen = chosen_days(case, record, need, tables)
    return Basis(
        record=record,
        need=need,
        chosen=chosen,
        inputs=plan_inputs(case, record, chosen.days, need, tables),
    )
