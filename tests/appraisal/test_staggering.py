"""Staggered starts as an alternative: costs nothing; its peak is that of the demand it is planned on."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from evenfire.appraisal.appraise import appraise
from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.results import Appraisal
from evenfire.appraisal.staggering import NAME, staggering
from evenfire.case.load import load_case
from evenfire.report.page import report_page
from tests.schedule_case import write_schedule_case

ALTERNATIVES = ("as is", "staggered starts", "storage")
PLAN = (
    'reference = "as is"\n',
    'reference = "as is"\nalternatives = ["as is", "staggered starts", "storage"]\n',
)
WIDE_GAP = ("gap_percent = 1.0", "gap_percent = 4.0")


@pytest.fixture(scope="module")
def appraisal(tmp_path_factory: pytest.TempPathFactory) -> Appraisal:
    return appraise(load_case(write_schedule_case(tmp_path_factory.mktemp("case"), PLAN, WIDE_GAP)))


def test_three_washers_heat_one_after_the_other(tmp_path: Path) -> None:
    """Two may wash while the third heats, but no two need to: starts at 0, 20 and 60 minutes.

    A batch heats 20 and washes 40 minutes, so the third heats when the first is done: without dryers
    200 + 150 + 1500 + 100 = 1950 kg/h, by hand, from 4850 kg/h. Three batches of an hour that start within an
    hour cannot all be apart, so one washes while another heats whatever the starts.
    """
    dryers = ("batches_per_shift = 4", "batches_per_shift = 1")
    none = ("steam_kg = 120.0", "steam_kg = 0.0")
    case = load_case(write_schedule_case(tmp_path, PLAN, dryers, none))
    found = staggering(case)

    assert found is not None
    assert found.today_t_h == pytest.approx(4.85)
    assert found.outcome.value == pytest.approx(1.95)
    assert found.outcome.bound is not None
    assert 0.99 * 1.95 <= found.outcome.bound <= 1.95 + 1e-9, "the case asks for a gap of 1 %"
    assert found.record.flow_kg_s.max() * 3.6 == pytest.approx(1.95)


def test_the_same_steam_is_made_at_other_times(appraisal: Appraisal) -> None:
    """Shifting starts changes when steam is taken, not how much; closed days stay closed."""
    found = staggering(appraisal.case)
    assert found is not None
    before = case_record(appraisal.case)

    assert found.record.flow_kg_s.sum() == pytest.approx(before.flow_kg_s.sum(), rel=1e-9)
    closed = slice(16 * 288, 17 * 288)
    assert np.array_equal(found.record.flow_kg_s[closed], before.flow_kg_s[closed])
    assert found.record.flow_kg_s.max() < before.flow_kg_s.max()


def test_it_is_an_alternative_without_investment(appraisal: Appraisal) -> None:
    """Today's boilers, no investment, and less unmet steam than as is."""
    as_is, staggered = appraisal.alternative("as is"), appraisal.alternative(NAME)

    assert [result.name for result in appraisal.alternatives] == list(ALTERNATIVES)
    assert staggered.planned
    assert staggered.investment == 0.0
    assert staggered.vessel is None
    assert [boiler.name for boiler in staggered.boilers] == [boiler.name for boiler in as_is.boilers]
    assert staggered.unmet_steam_t_per_year < as_is.unmet_steam_t_per_year
    assert staggered.net_present_cost is not None
    assert as_is.net_present_cost is not None
    assert staggered.net_present_cost < as_is.net_present_cost
    assert staggered.steam_t_per_year + staggered.unmet_steam_t_per_year == pytest.approx(
        as_is.steam_t_per_year + as_is.unmet_steam_t_per_year, rel=0.02
    )


def test_the_report_says_which_starts_move(appraisal: Appraisal) -> None:
    """The notice names batches with old and new times, and the page shows it."""
    (notice,) = [notice for notice in appraisal.notices if notice.code == "N204"]

    assert "“wash” 06:00 to 06:20" in notice.text
    assert "no choice within the limits" in notice.text
    assert "06:00 to 06:20" in report_page(appraisal)


def test_a_vessel_short_of_units_is_said(tmp_path: Path) -> None:
    """With one washer for three batches of an hour, an hour of room is not enough: no plan, and why."""
    one = ("units = 3", "units = 1")
    case = load_case(write_schedule_case(tmp_path, PLAN, WIDE_GAP, one))
    assert staggering(case) is None
    found = appraise(replace(case, plan=replace(case.plan, alternatives=("as is", NAME))))

    assert not found.alternative(NAME).planned
    assert any("leave every batch a unit" in notice.text for notice in found.notices)
