"""What a record of steam demand is worth: its quality, peaks, storage need and typical days."""

from __future__ import annotations

from dataclasses import dataclass, field

from evenfire.demand.enough_days import EnoughDays
from evenfire.demand.peaks import Peak, ranked_peaks
from evenfire.demand.quality import QualitySheet, record_quality
from evenfire.demand.sensor_faults import Stretch
from evenfire.demand.series import DemandRecord, Gap, StorageNeed
from evenfire.demand.statistics import DemandStatistics, demand_statistics
from evenfire.demand.storage_need import storage_need
from evenfire.errors import Notice

_KEPT = "kept as measured; a question to the site"
_DONE = {
    "R141": "filled as stated, and counted",
    "R142": _KEPT,
    "R143": _KEPT,
    "R144": _KEPT,
    "R145": _KEPT,
    "R146": "kept as measured",
    "R147": "the year is made of the other days",
    "R151": "drawn, not measured",
    "R153": "drawn, to show how weeks differ",
    "R190": "scaled up to a year",
    "R191": "filled as stated",
    "R192": "read as the file decides",
    "R193": "left out",
    "R194": "counted as missing",
    "R195": "steam across it counted as missing, or added up across the stated rollover",
    "R196": "taken as zero",
    "R197": "put on one clock",
    "R198": "reckoned with the constants named",
    "R199": "averaged to regular steps",
    "R200": "added up row by row",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class RecordProblem:
    """One thing found in a record, where, and what was done about it."""

    code: str
    severity: str
    text: str
    done: str
    stretches: tuple[tuple[int, int], ...] = field(repr=False)
    """First and last step concerned, both included, counted from 0; empty where the text names the place."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RecordStudy:
    """Everything ``evenfire record`` shows of one record."""

    title: str
    record: DemandRecord
    quality: QualitySheet
    statistics: DemandStatistics
    capacity_kg_s: float
    """Capacity above which peaks are ranked [kg/s]."""
    capacity_words: str
    """What that capacity is, in words."""
    peaks: tuple[Peak, ...] = field(repr=False)
    """Those with the most steam above the capacity first."""
    storage_need: StorageNeed = field(repr=False)
    typical: EnoughDays | None
    """None where the record holds no complete day; a problem then says so."""
    problems: tuple[RecordProblem, ...]


def record_study(
    record: DemandRecord,
    title: str,
    capacity_kg_s: float | None,
    capacity_words: str,
    typical: EnoughDays | None,
    untypical: Notice | None,
) -> RecordStudy:
    """Study of a record, ready to be shown.

    Parameters
    ----------
    record
        The measured or drawn record.
    title
        Name of the site or of the file.
    capacity_kg_s
        Boiler capacity above which peaks are ranked [kg/s]; halfway between mean and peak when None.
    capacity_words
        What that capacity is; not used when it is None.
    typical
        Typical days chosen for it, if it has complete days.
    untypical
        Why there are no typical days, if there are none.
    """
    quality = record_quality(record)
    found = demand_statistics(record)
    if capacity_kg_s is None:
        capacity_kg_s, capacity_words = (found.mean_kg_s + found.peak_kg_s) / 2.0, "halfway from mean to peak"
    notices = (*quality.notices, *(() if untypical is None else (untypical,)))
    return RecordStudy(
        title=title,
        record=record,
        quality=quality,
        statistics=found,
        capacity_kg_s=capacity_kg_s,
        capacity_words=capacity_words,
        peaks=ranked_peaks(record, capacity_kg_s),
        storage_need=storage_need(record.flow_kg_s, record.step_s),
        typical=typical,
        problems=tuple(_problem(notice, quality) for notice in notices),
    )


def _problem(notice: Notice, quality: QualitySheet) -> RecordProblem:
    places: dict[str, tuple[Gap | Stretch, ...]] = {
        "R141": quality.gaps,
        "R142": quality.spikes,
        "R143": quality.dropouts,
        "R144": quality.flat_lines,
        "R145": quality.saturation.stretches if quality.saturation is not None else (),
        "R191": quality.gaps,
    }
    return RecordProblem(
        code=notice.code,
        severity=notice.severity,
        text=notice.text,
        done=_DONE.get(notice.code, "nothing"),
        stretches=tuple((each.first_step, each.last_step) for each in places.get(notice.code, ())),
    )
