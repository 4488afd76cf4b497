"""The [schedule] section: demand from equipment, alone or on top of a record."""

from __future__ import annotations

import datetime as dt
import json
import sys
from pathlib import Path

import numpy as np
import pytest

from evenfire.appraisal.case_record import case_record
from evenfire.case.load import load_case
from evenfire.cli.main import main
from evenfire.errors import CaseError
from tests.schedule_case import SCHEDULE, write_schedule_case
from tests.small_case import write_small_case


def test_every_key_arrives_in_si(tmp_path: Path) -> None:
    """Minutes become seconds, kg/h kg/s, words of weekdays numbers, limits of starts a list."""
    request = load_case(write_schedule_case(tmp_path)).schedule
    assert request is not None
    wash, dry = request.schedule.batches

    assert request.first_monday == dt.date(2026, 2, 2)
    assert (request.weeks, request.step_s, request.seed, request.week_share) == (3, 300.0, 3, None)
    assert request.schedule.shifts[0].weekdays == (0, 1, 2, 3, 4)
    assert request.schedule.shifts[0].start_s == 6 * 3600.0
    assert request.schedule.closed_dates == (dt.date(2026, 2, 18),)
    assert wash.starts_s == (0.0, 0.0, 0.0, 10800.0, 10800.0, 10800.0)
    assert wash.phases[0].flow_kg_s == pytest.approx(1500.0 / 3600.0)
    assert dry.phases[0].flow_kg_s == pytest.approx(120.0 / 1800.0)
    assert dry.window_s == (3600.0, 25200.0)
    assert [(each.batch, each.earlier_s, each.later_s) for each in request.start_limits] == [
        ("wash", 0.0, 3600.0)
    ]


def test_batch_heat_follows_from_mass_and_temperature(tmp_path: Path) -> None:
    """2 t of water by 60 K with 10 % loss at 3 bar g: latent heat 2133 kJ/kg at 4.01325 bar abs."""
    by_flow = "flow_kg_h = 1500.0"
    by_mass = "mass_kg = 2000.0, heat_capacity_kj_per_kg_k = 4.18, temperature_rise_k = 60.0"
    by_mass += ", heat_loss_percent = 10.0"
    request = load_case(write_schedule_case(tmp_path, (by_flow, by_mass))).schedule
    assert request is not None
    steam_kg = request.schedule.batches[0].phases[0].flow_kg_s * 1200.0
    assert steam_kg == pytest.approx(2000.0 * 4.18 * 60.0 / (2133.0 * 0.9), rel=1e-3)


def test_demand_is_what_the_equipment_takes(tmp_path: Path) -> None:
    """Steam of fourteen open shifts, base and all, and three washers heating at once at six o'clock."""
    record = case_record(load_case(write_schedule_case(tmp_path)))
    hours = 21 * 24.0
    shifts = 14
    per_shift = 6 * (1500.0 / 3.0 + 100.0 * 2.0 / 3.0) + 8 * 150.0
    steam = record.flow_kg_s.sum() * record.step_s
    spread = shifts * 4 * 120.0

    assert record.start == dt.datetime(2026, 2, 2)
    assert record.flow_kg_s.size == 21 * 288
    assert steam == pytest.approx(200.0 * hours + shifts * per_shift + spread, rel=0.01)
    assert record.flow_kg_s[6 * 12] * 3600.0 == pytest.approx(200.0 + 150.0 + 3 * 1500.0, rel=1e-9)
    assert {"R151", "R153"} <= {notice.code for notice in record.notices}


def test_a_week_can_be_sized_for(tmp_path: Path) -> None:
    """Of the drawn weeks, 95 of 100 need no more storage at today's boilers than the one taken."""
    weeks = ("weeks = 3", "weeks = 40\nsize_for_week_percent = 95.0")
    boilers = ("rating_kg_h = 3000\nrating_basis", "rating_kg_h = 1500\nrating_basis")
    random = (
        "starts_minutes = [0.0, 0.0, 0.0, 180.0, 180.0, 180.0]",
        "batches_per_shift = 6\nlatest_start_minutes = 400.0",
    )
    fixed = ("may_start_later_minutes = 60.0", "")
    case = load_case(write_schedule_case(tmp_path, weeks, boilers, random, fixed))
    record = case_record(case)
    drawn = case_record(
        load_case(write_schedule_case(tmp_path / "all", ("weeks = 3", "weeks = 40"), random, fixed))
    )

    def need(flow: np.ndarray) -> float:
        level = highest = 0.0
        for value in flow:
            level = max(0.0, level + (value - 1500.0 / 3600.0) * 300.0)
            highest = max(highest, level)
        return highest

    needs = sorted(need(week) for week in drawn.flow_kg_s.reshape(40, -1))
    assert record.days == 7.0
    assert need(record.flow_kg_s) == pytest.approx(needs[37], rel=1e-9)


def test_a_schedule_comes_on_top_of_a_record(tmp_path: Path) -> None:
    """With [record] the new equipment is added to each measured step, and to nothing else."""
    folder = write_small_case(tmp_path / "case")
    measured = case_record(load_case(folder))
    added = SCHEDULE
    for line in ('first_monday = "2026-02-02"\n', "weeks = 3\n", "step_seconds = 300.0\n"):
        added = added.replace(line, "")
    with (folder / "case.toml").open("a") as file:
        file.write(added)
    both = case_record(load_case(folder))
    difference_kg_h = (both.flow_kg_s - measured.flow_kg_s) * 3600.0

    assert both.start == measured.start
    assert difference_kg_h[0] == pytest.approx(200.0)
    assert difference_kg_h[24] == pytest.approx(200.0 + 150.0 + 3 * 1500.0)
    assert difference_kg_h.min() == pytest.approx(200.0)


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('first_monday = "2026-02-02"', 'first_monday = "2026-02-03"', "Tuesday.*C141"),
        ('first_monday = "2026-02-02"', 'first_monday = "2026-02-30"', "2026-02-30.*C141"),
        ("weeks = 3\n", "", "schedule.weeks.*missing.*C104"),
        ("flow_kg_h = 1500.0", "flow_kg_h = 1500.0, steam_kg = 3.0", "flow_kg_h, steam_kg.*C141"),
        ("flow_kg_h = 1500.0", "mass_kg = 3.0", "found mass_kg.*C141"),
        ("batches_per_shift = 4", "batches_per_shift = 4\nmay_start_later_minutes = 5.0", "'dry'.*C142"),
        ('shifts = ["early"]\nstarts', 'shifts = ["late"]\nstarts', "no shift 'late'.*R150"),
        ("180.0, 180.0, 180.0]", "180.0, 180.0, 480.0]", "starts from 0 to 28800 s.*R150"),
        ('start = "06:00"', 'start = "6"', "06:00.*C108"),
        ("seed = 3", "sede = 3", "did you mean 'seed'.*C103"),
    ],
)
def test_what_cannot_be_meant_is_refused(tmp_path: Path, old: str, new: str, said: str) -> None:
    """Each contradiction names its place, what was found and what is allowed."""
    with pytest.raises(CaseError, match=said):
        load_case(write_schedule_case(tmp_path, (old, new)))


def test_keys_for_drawing_weeks_are_refused_beside_a_record(tmp_path: Path) -> None:
    """A record says when and in which steps; the schedule must not say it again."""
    folder = write_small_case(tmp_path / "case")
    with (folder / "case.toml").open("a") as file:
        file.write(SCHEDULE)
    with pytest.raises(CaseError, match=r"first_monday: stated beside a \[record\]") as refused:
        load_case(folder)
    assert {problem.code for problem in refused.value.problems} == {"C141"}
    assert len(refused.value.problems) == 3


def test_a_case_without_a_meter_is_studied_by_the_record_command(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """``evenfire record`` on a schedule says that nothing was measured."""
    folder = write_schedule_case(tmp_path / "case")
    monkeypatch.setattr(sys, "argv", ["evenfire", "record", str(folder), "--out", str(tmp_path / "out")])
    with pytest.raises(SystemExit) as stopped:
        main()
    assert not stopped.value.code
    found = json.loads((tmp_path / "out" / "record.json").read_text())
    assert {"R151", "R153"} <= {problem["code"] for problem in found["problems"]}
