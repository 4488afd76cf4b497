"""A sweep as one JSON document and as a table, with reproducible bytes."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import asdict
from typing import Any

from evenfire.report.cautions import CAUTIONS
from evenfire.report.document import rounded
from evenfire.sweep.results import RankedInput, SweepResult

SWEEP_SCHEMA_VERSION = 1
COLUMNS = (
    "standing",
    "net_present_cost",
    "bound",
    "gap",
    "investment",
    "boilers",
    "vessel_volume_m3",
    "charged_bar_g",
    "discharged_bar_g",
    "fuel_mwh_per_year",
    "burner_starts_per_year",
    "unmet_steam_t_per_year",
)


def sweep_document_text(result: SweepResult) -> str:
    """The JSON document of a sweep as text, ending in a line feed; the same sweep gives the same bytes."""
    return json.dumps(sweep_document(result), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def sweep_document(result: SweepResult) -> dict[str, Any]:
    """A sweep as plain data; ``null`` where an alternative has no plan."""
    paths = [each.path for each in result.inputs]
    others = [path for index, path in enumerate(paths) if index != result.along]
    content: dict[str, Any] = rounded(
        {
            "schema_version": SWEEP_SCHEMA_VERSION,
            "site": result.case_name,
            "currency": result.currency,
            "fuel_basis": result.fuel_basis,
            "cautions": list(CAUTIONS),
            "asked_gap": result.asked_gap,
            "inputs": [
                {"path": x.path, "unit": x.unit, "stated": x.stated, "values": list(x.values)}
                for x in result.inputs
            ],
            "along": paths[result.along] if paths else None,
            "exact_between_points": result.straight,
            "points": [
                {
                    "values": dict(zip(paths, point.values, strict=True)),
                    "winner": point.winner,
                    "alternatives": [asdict(x) | {"boilers": list(x.boilers)} for x in point.alternatives],
                }
                for point in result.points
            ],
            "break_evens": [
                {
                    "alternatives": [each.cheaper_below, each.cheaper_above],
                    "cheaper_below": each.cheaper_below,
                    "cheaper_above": each.cheaper_above,
                    "value": each.value,
                    "low": each.low,
                    "high": each.high,
                    "proven": each.proven,
                    "at": dict(zip(others, each.at, strict=True)),
                }
                for each in result.break_evens
            ],
            "stretches": [
                {
                    "low": each.low,
                    "high": each.high,
                    "winner": each.winner,
                    "rivals": list(each.rivals),
                    "at": dict(zip(others, each.at, strict=True)),
                }
                for each in result.stretches
            ],
            "ranking": [_ranked(each) for each in result.ranking],
            "notices": [asdict(each) for each in result.notices],
            "input_hashes_sha256": dict(result.input_hashes),
            "versions": dict(result.versions),
        }
    )
    return content


def _ranked(each: RankedInput) -> dict[str, Any]:
    return {
        "name": each.name,
        "paths": list(each.paths),
        "swing": each.swing,
        "largest_gap": each.gap,
        "low": asdict(each.low) | {"net_present_cost": list(each.low.net_present_cost)},
        "high": asdict(each.high) | {"net_present_cost": list(each.high.net_present_cost)},
    }


def sweep_table(result: SweepResult) -> str:
    """One row per point and alternative, for a spreadsheet."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow([*(each.path for each in result.inputs), "alternative", "winner", *COLUMNS])
    for point in result.points:
        for each in point.alternatives:
            cells = asdict(each) | {"boilers": " + ".join(each.boilers)}
            writer.writerow(
                [
                    *(rounded(value) for value in point.values),
                    each.name,
                    "yes" if each.name == point.winner else "no",
                    *("" if cells[column] is None else _cell(rounded(cells[column])) for column in COLUMNS),
                ]
            )
    return text.getvalue()


def _cell(value: Any) -> Any:
    """Text that a spreadsheet would take for a formula starts with an apostrophe."""
    return f"'{value}" if isinstance(value, str) and value[:1] in "=+-@" and value else value
