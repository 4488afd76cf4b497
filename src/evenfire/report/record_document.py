"""What a record is worth as one JSON document with a versioned schema and reproducible bytes."""

from __future__ import annotations

import datetime as dt
import json
from typing import Any

from evenfire.appraisal.record_study import RecordProblem, RecordStudy
from evenfire.demand.enough_days import EnoughDays
from evenfire.demand.series import DemandRecord
from evenfire.report.cautions import CAUTIONS
from evenfire.report.document import rounded
from evenfire.units import KG_PER_TONNE, SECONDS_PER_HOUR, kg_s_to_kg_h

RECORD_SCHEMA_VERSION = 1
PERCENT = 100.0
MOST_PEAKS = 200


def record_document_text(study: RecordStudy, inputs: tuple[tuple[str, str], ...]) -> str:
    """The JSON document of a record as text, ending in a line feed; the same study gives the same bytes.

    Parameters
    ----------
    study
        What was found.
    inputs
        Name and SHA-256 of every input file.
    """
    content = record_document(study, inputs)
    return json.dumps(content, indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def record_document(study: RecordStudy, inputs: tuple[tuple[str, str], ...]) -> dict[str, Any]:
    """A record's study as plain data: numbers in the trade units that their keys name."""
    record, found, quality = study.record, study.statistics, study.quality
    content: dict[str, Any] = rounded(
        {
            "schema_version": RECORD_SCHEMA_VERSION,
            "title": study.title,
            "source": record.source,
            "start": record.start.isoformat(),
            "step_s": record.step_s,
            "steps": int(record.flow_kg_s.size),
            "days": found.days,
            "steam_t": found.steam_kg / KG_PER_TONNE,
            "mean_kg_h": kg_s_to_kg_h(found.mean_kg_s),
            "peak_kg_h": kg_s_to_kg_h(found.peak_kg_s),
            "lowest_kg_h": kg_s_to_kg_h(found.lowest_kg_s),
            "load_factor": found.load_factor,
            "coverage_percent": PERCENT * quality.coverage,
            "idle_percent": PERCENT * quality.idle_share,
            "cautions": list(CAUTIONS),
            "problems": [_problem(record, each) for each in study.problems],
            "peak_length_minutes": quality.resolution.peak_length_s / 60.0,
            "ramps": [
                {
                    "within_s": ramp.within_s,
                    "largest_rise_kg_h": kg_s_to_kg_h(ramp.largest_rise_kg_s),
                    "usual_rise_kg_h": kg_s_to_kg_h(ramp.usual_rise_kg_s),
                    "largest_fall_kg_h": kg_s_to_kg_h(ramp.largest_fall_kg_s),
                }
                for ramp in quality.ramps
            ],
            "peaks_above_kg_h": kg_s_to_kg_h(study.capacity_kg_s),
            "peaks_above_means": study.capacity_words,
            "peaks_count": len(study.peaks),
            "peaks": [
                {
                    "start": _moment(record, peak.first_step),
                    "duration_minutes": peak.duration_s / 60.0,
                    "steam_above_kg": peak.steam_above_kg,
                    "highest_kg_h": kg_s_to_kg_h(peak.highest_kg_s),
                }
                for peak in study.peaks[:MOST_PEAKS]
            ],
            "storage_need": [
                {"capacity_kg_h": kg_s_to_kg_h(float(capacity)), "storage_kg": float(storage)}
                for capacity, storage in zip(
                    study.storage_need.capacity_kg_s, study.storage_need.storage_kg, strict=True
                )
            ],
            "storage_need_intervals": [
                {
                    "steam_kg": piece.energy_kg,
                    "duration_h": piece.duration_s / SECONDS_PER_HOUR,
                    "start": _moment(record, piece.first_step),
                }
                for piece in study.storage_need.pieces
            ],
            "typical_days": None if study.typical is None else typical_days_document(study.typical),
            "input_hashes_sha256": dict(inputs),
        }
    )
    return content


def typical_days_document(found: EnoughDays) -> dict[str, Any]:
    """Typical days with weights and errors; a cost error that was not asked for is ``null``."""
    typical, errors = found.days, found.errors
    return {
        "step_s": typical.step_s,
        "errors_within_tolerances": found.met,
        "errors": {
            "energy_percent": PERCENT * errors.energy,
            "duration_curve_percent": PERCENT * errors.duration_curve,
            "steam_above_capacity_percent": PERCENT * errors.peak_steam,
            "time_above_capacity_percent": PERCENT * errors.peak_time,
            "highest_step_percent": PERCENT * typical.peak_error,
            "cost_percent": None if errors.cost is None else PERCENT * errors.cost,
        },
        "days": [
            {
                "name": day.name,
                "date": day.date.isoformat(),
                "days_per_year": day.days_per_year,
                "mean_kg_h": kg_s_to_kg_h(float(day.flow_kg_s.mean())),
                "peak_kg_h": kg_s_to_kg_h(float(day.flow_kg_s.max())),
            }
            for day in typical.days
        ],
    }


def _problem(record: DemandRecord, problem: RecordProblem) -> dict[str, Any]:
    return {
        "code": problem.code,
        "severity": problem.severity,
        "text": problem.text,
        "done": problem.done,
        "rows": [
            {
                "first": first + 1,
                "last": last + 1,
                "from": _moment(record, first),
                "to": _moment(record, last + 1),
            }
            for first, last in problem.stretches
        ],
    }


def _moment(record: DemandRecord, step: int) -> str:
    return (record.start + dt.timedelta(seconds=step * record.step_s)).isoformat()
