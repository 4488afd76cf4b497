"""Remarks of a run gathered for the reader, each with where it comes from."""

from __future__ import annotations

from evenfire.appraisal.results import Appraisal
from evenfire.demand.quality import record_quality
from evenfire.errors import Notice


def all_notices(appraisal: Appraisal) -> tuple[Notice, ...]:
    """Notices of the case, the record and its quality, and the appraisal, each once, in that order."""
    found = (*appraisal.case.notices, *record_quality(appraisal.record).notices, *appraisal.notices)
    return tuple(dict.fromkeys(found))
