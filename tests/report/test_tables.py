"""The dispatch table: readable by other programs, safe to open, free of double counting."""

from __future__ import annotations

import csv
import dataclasses
import io

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from evenfire.appraisal.results import Appraisal
from evenfire.report.tables import boiler_names, dispatch_table
from tests.report.made_appraisal import made_appraisal

SMALL = made_appraisal()


@pytest.fixture(scope="module")
def table(appraisal: Appraisal) -> pd.DataFrame:
    """The table as pandas reads it."""
    return pd.read_csv(io.StringIO(dispatch_table(appraisal)))


def test_one_row_per_alternative_day_and_step(table: pd.DataFrame) -> None:
    """Four planned alternatives, four typical days, 288 steps of five minutes each."""
    assert len(table) == 4 * 4 * 288
    assert not table.duplicated(["alternative", "day", "time"]).any()
    assert list(table["time"][:3]) == ["00:00", "00:05", "00:10"]


def test_hours_per_year_add_up_to_a_year(table: pd.DataFrame) -> None:
    """The weights of an alternative's rows are the 8760 hours of a year."""
    for hours in table.groupby("alternative")["hours_per_year"].sum():
        assert hours == pytest.approx(8760.0, rel=1e-8)


def test_weighted_outputs_are_the_steam_of_a_year(appraisal: Appraisal, table: pd.DataFrame) -> None:
    """Output times hours per year, added up, is what the schedule gives by hand."""
    rows = table[table["alternative"] == "bigger boiler"]
    column = rows["output_t_h [New boiler 8 t/h]"]
    by_hand = sum(
        float(day.output_t_h[0].sum()) * day.step_minutes / 60.0 * day.days_per_year
        for day in appraisal.alternative("bigger boiler").schedule
    )
    assert float(np.sum(column * rows["hours_per_year"])) == pytest.approx(by_hand, rel=1e-5)


def test_a_boiler_keeps_its_column_and_is_empty_elsewhere(table: pd.DataFrame) -> None:
    """A boiler that an alternative does not have leaves its cells empty, not zero."""
    filled = table.groupby("alternative")["output_t_h [Boiler 1, 5 t/h]"].count()
    assert filled["as is"] == 4 * 288
    assert filled["bigger boiler"] == 0
    assert table.groupby("alternative")["vessel_bar_abs"].count().to_dict() == {
        "as is": 0,
        "bigger boiler": 0,
        "further boiler": 0,
        "storage": 4 * 288,
    }


def test_two_boilers_of_one_name_have_two_columns(appraisal: Appraisal) -> None:
    """The second of two equal boilers is numbered."""
    first = appraisal.alternatives[0]
    twins = dataclasses.replace(first, boilers=(first.boilers[0], first.boilers[0]))
    assert boiler_names(twins) == ("Boiler 1, 5 t/h", "Boiler 1, 5 t/h (2)")


@given(
    sign=st.sampled_from(["=", "+", "-", "@", "\t", "\r", "\n"]),
    rest=st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), max_size=20),
)
def test_no_user_text_becomes_a_formula(sign: str, rest: str) -> None:
    """Whatever an alternative, a day or a boiler is called, no text cell starts like a formula."""
    hostile = sign + rest
    first = SMALL.alternatives[0]
    day = dataclasses.replace(first.schedule[0], day=hostile, demand_t_h=first.schedule[0].demand_t_h[:2])
    renamed = dataclasses.replace(
        first,
        name=hostile,
        schedule=(day,),
        boilers=tuple(dataclasses.replace(each, name=hostile) for each in first.boilers),
    )
    text = dispatch_table(dataclasses.replace(SMALL, alternatives=(renamed,)))
    rows = list(csv.reader(io.StringIO(text, newline="")))
    assert len(rows) == 3
    for cell in (cell for row in rows for cell in row):
        assert not cell.startswith(("=", "+", "-", "@", "\t", "\r", "\n"))
    assert rows[1][0].removeprefix("'") == " ".join(hostile.split())
