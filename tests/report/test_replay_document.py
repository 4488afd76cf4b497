"""The replay's files: numbers as in the result, user text that stays text."""

from __future__ import annotations

import csv
import dataclasses
import io
import json

from evenfire.appraisal.results import Appraisal, SetPoint
from evenfire.report.replay_document import replay_document_text, set_point_table, trace_table


def test_every_alternative_carries_what_was_asked(appraisal: Appraisal) -> None:
    """Fuel, starts, hours, unmet steam, pressure, closures, savings, set-points and margin of each."""
    content = json.loads(replay_document_text(appraisal))
    asked = {
        "fuel_mwh_per_year",
        "burner_starts_per_year",
        "firing_hours_per_year",
        "unmet_steam_t_per_year",
        "lowest_process_pressure_bar_abs",
        "mass_closure_relative",
        "energy_closure_relative",
        "planned_saving",
        "realised_saving",
        "set_points",
        "margin",
    }
    assert [each["name"] for each in content["alternatives"]] == [
        each.name for each in appraisal.alternatives if each.replayed is not None
    ]
    assert all(each.keys() >= asked for each in content["alternatives"])
    assert content["cautions"]


def test_a_name_that_looks_like_a_formula_stays_text(appraisal: Appraisal) -> None:
    """A boiler called =1+1 does not become a formula in the set-point sheet."""
    first = appraisal.alternatives[0]
    assert first.replayed is not None
    row = SetPoint(name="=1+1: burner on below", value="8.50", unit="bar g", purpose="@boiler")
    run = dataclasses.replace(first.replayed, set_points=(row,))
    made = dataclasses.replace(appraisal, alternatives=(dataclasses.replace(first, replayed=run),))
    (written,) = csv.DictReader(io.StringIO(set_point_table(made)))

    assert written["name"] == "'=1+1: burner on below"
    assert written["purpose"] == "'@boiler"


def test_the_trace_has_a_row_for_every_step(appraisal: Appraisal) -> None:
    """Two days at a minute per alternative, in order of time."""
    rows = list(csv.DictReader(io.StringIO(trace_table(appraisal))))
    first = [row for row in rows if row["alternative"] == appraisal.alternatives[0].name]

    assert len(first) == 2880
    assert [row["time"] for row in first] == sorted(row["time"] for row in first)
