"""Remarks of a run gathered for the reader, each with where it comes from."""

from __future__ import annotations

from evenfire.appraisal.results import Appraisal
from evenfire.errors import Notice


def all_notices(appraisal: Appraisal) -> tuple[Notice, ...]:
    """Notices of the case, the record and the appraisal, each once, in that order."""
    found = (*appraisal.case.notices, *appraisal.record.notices, *appraisal.notices)
    return tuple(dict.fromkeys(found))
