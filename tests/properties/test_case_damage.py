"""However a case file is damaged, it is read or refused; it never ends in a defect of ours."""

from __future__ import annotations

import copy
import tomllib
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from evenfire.case.case import Case
from evenfire.case.change import numeric_paths
from evenfire.case.checks import draft_problems
from evenfire.case.draft import case_draft
from evenfire.case.load import load_case
from evenfire.errors import CaseError, Problem

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"
RAW = tomllib.loads((CANNERY / "case.toml").read_text())
PATHS = numeric_paths(RAW)

ODD_VALUES = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(),
    st.floats(),
    st.text(max_size=20),
    st.dates(),
    st.lists(st.integers(), max_size=3),
    st.dictionaries(st.text(max_size=8), st.integers(), max_size=3),
)


def _places(node: Any, above: tuple[str | int, ...] = ()) -> list[tuple[str | int, ...]]:
    """Every place in a table of TOML, tables and rows included."""
    steps = node.items() if isinstance(node, dict) else enumerate(node) if isinstance(node, list) else ()
    found = []
    for step, child in steps:
        found += [(*above, step), *_places(child, (*above, step))]
    return found


PLACES = _places(RAW)


@settings(max_examples=300, deadline=None)
@given(place=st.sampled_from(PLACES), value=ODD_VALUES)
def test_any_value_anywhere_is_read_or_told(place, value):
    """One odd value at any place gives problems that say where, what was found and what to do, or none."""
    raw = copy.deepcopy(RAW)
    holder: Any = raw
    for step in place[:-1]:
        holder = holder[step]
    holder[place[-1]] = value
    draft, problems = case_draft(raw, "case.toml")
    problems += draft_problems(draft)
    for problem in problems:
        assert problem.where.startswith("case.toml: ")
        assert problem.found
        assert problem.allowed


@settings(max_examples=200, deadline=None)
@given(place=st.sampled_from(PLACES))
def test_anything_left_out_is_read_or_told(place):
    """A case without one of its keys, rows or sections is read, or what is missing is told."""
    raw = copy.deepcopy(RAW)
    holder: Any = raw
    for step in place[:-1]:
        holder = holder[step]
    del holder[place[-1]]
    draft, problems = case_draft(raw, "case.toml")
    assert all(str(problem) for problem in problems + draft_problems(draft))


def _case_or_problems(folder: Path, changes: dict[str, float]) -> tuple[Case | None, tuple[Problem, ...]]:
    try:
        return load_case(folder, changes), ()
    except CaseError as error:
        return None, error.problems


@settings(max_examples=100, deadline=None)
@given(path=st.sampled_from(PATHS), value=st.floats())
def test_any_number_at_any_path_gives_a_case_or_a_case_error(path, value):
    """A sweep to any value of any input ends in a sound case or in an error that a user can mend."""
    case, problems = _case_or_problems(CANNERY, {path: value})
    assert all("case.toml" in problem.where or "boiler" in problem.where for problem in problems)
    if case is not None:
        points = [point for offer in case.boilers for point in offer.spec.efficiency_points]
        assert all(0.0 < point.efficiency_lhv <= 1.0 for point in points)
        assert all(window.charged_pa > window.discharged_pa for window in case.vessel.windows)


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(start=st.integers(0, 4000), junk=st.binary(max_size=6))
def test_damaged_bytes_are_read_or_told(tmp_path, start, junk):
    """Bytes overwritten anywhere in the file give a case or a case error."""
    content = bytearray((CANNERY / "case.toml").read_bytes())
    content[start : start + len(junk)] = junk
    (tmp_path / "case.toml").write_bytes(content)
    (tmp_path / "steam.csv.gz").write_bytes(b"")
    case, problems = _case_or_problems(tmp_path, {})
    assert (case is None) == bool(problems)


@given(value=st.floats(0.01, 99_999.0))
@settings(max_examples=40, deadline=None)
def test_fuel_price_comes_back_on_its_own_basis(value):
    """Price per net joule times the net joules in a gross MWh is the price that was typed."""
    case = load_case(CANNERY, {"fuel.price_per_mwh": value})
    back = case.prices.fuel_per_j_lhv.amount * 3.6e9 * case.fuel.lhv_to_hhv
    assert back == pytest.approx(value, rel=1e-12)
