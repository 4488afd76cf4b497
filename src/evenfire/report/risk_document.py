"""Random scenarios as one JSON document and as a table, with reproducible bytes."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import asdict
from typing import Any

from evenfire.report.cautions import CAUTIONS
from evenfire.report.document import rounded
from evenfire.sweep.risk_results import RiskResult

RISK_SCHEMA_VERSION = 1
ROUGH_DIGITS = 9
"""Significant digits in the table of scenarios."""


def risk_document_text(result: RiskResult) -> str:
    """The JSON document as text, ending in a line feed; the same scenarios give the same bytes."""
    return json.dumps(risk_document(result), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def risk_document(result: RiskResult) -> dict[str, Any]:
    """What the scenarios found as plain data; the scenarios themselves are in the table."""
    again = result.replanned
    content: dict[str, Any] = rounded(
        {
            "schema_version": RISK_SCHEMA_VERSION,
            "site": result.case_name,
            "currency": result.currency,
            "cautions": list(CAUTIONS),
            "scenarios": result.scenarios,
            "seed": result.seed,
            "inputs": [asdict(each) for each in result.inputs],
            "alternatives": [asdict(each) for each in result.alternatives],
            "likeliest_cheapest": result.likeliest_cheapest,
            "least_expected_regret": result.least_expected_regret,
            "least_largest_regret": result.least_largest_regret,
            "planned_anew": None
            if again is None
            else {
                "scenarios": again.scenarios,
                "largest_gap": again.largest_gap,
                "alternatives": [
                    asdict(each) | {"saved_by_planning_anew": saved}
                    for each, saved in zip(again.alternatives, again.saved_by_replanning, strict=True)
                ],
            },
            "notices": [asdict(each) for each in result.notices],
            "input_hashes_sha256": dict(result.input_hashes),
            "versions": dict(result.versions),
        }
    )
    return content


def risk_table(result: RiskResult) -> str:
    """One row per scenario: what was drawn, and what every alternative costs as planned."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(
        [
            "scenario",
            *(f"{each.name} [deviation %]" for each in result.inputs),
            *(f"{each.name} [{result.currency}]" for each in result.alternatives),
        ]
    )
    for number, (drawn, costs) in enumerate(zip(result.draws.tolist(), result.costs.tolist(), strict=True)):
        writer.writerow([number, *(f"{value:.{ROUGH_DIGITS}g}" for value in (*drawn, *costs))])
    return text.getvalue()
