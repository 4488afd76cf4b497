"""Any number of a case can be changed by its path before the case is checked."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from evenfire.case.change import numeric_paths
from evenfire.case.load import load_case
from evenfire.errors import CaseError

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"
BOILER_2 = 'existing_boiler."Boiler 2, 2.5 t/h"'


def test_price_is_changed_and_the_rest_is_not():
    """Only the fuel price differs between the changed case and the case as written."""
    plain, changed = load_case(CANNERY), load_case(CANNERY, {"fuel.price_per_mwh": 92.0})
    assert changed.prices.fuel_per_j_lhv.amount == pytest.approx(2.0 * plain.prices.fuel_per_j_lhv.amount)
    assert changed.boilers == plain.boilers
    assert changed.input_hashes == plain.input_hashes


@pytest.mark.parametrize(
    "path",
    [
        f"{BOILER_2}.turndown_ratio",
        "existing_boiler['Boiler 2, 2.5 t/h'].turndown_ratio",
        "existing_boiler.Boiler 2, 2.5 t/h.turndown_ratio",
        "existing_boiler[1].turndown_ratio",
        "existing_boiler.1.turndown_ratio",
    ],
)
def test_a_boiler_is_addressed_by_name_or_position(path):
    """Every spelling of the path reaches the same boiler, also where its name holds a dot."""
    with pytest.raises(CaseError, match=r"'Boiler 2, 2\.5 t/h', turndown_ratio: found 0\.5"):
        load_case(CANNERY, {path: 0.5})


def test_row_of_a_list_is_addressed_by_position_from_0():
    """sizes[0] is the first size and an entry of a list of numbers is reached the same way."""
    case = load_case(
        CANNERY, {"new_boiler.sizes[0].installed_cost": 1.0, "vessel.charged_pressures_bar_g[3]": 14.0}
    )
    assert case.boilers[2].investment.amount == 1.0
    assert case.vessel.windows[-1].charged_pa == pytest.approx(1_501_325.0)


def test_key_that_the_case_leaves_out_can_be_set():
    """An optional key that the file does not state can be swept, and is then no assumption."""
    case = load_case(CANNERY, {f"{BOILER_2}.purge_energy_kwh": 4.0})
    assert case.boilers[1].spec.purge_energy_j == pytest.approx(4.0 * 3.6e6)
    assert not any("Boiler 2" in notice.text and "purge" in notice.text for notice in case.notices)


def test_whole_number_given_as_float_is_a_whole_number():
    """A sweep that counts in floats can change years."""
    assert load_case(CANNERY, {"money.horizon_years": 20.0}).finance.horizon_years == 20


@pytest.mark.parametrize(
    ("path", "offer"),
    [
        ("fuel.price_per_mhw", "did you mean 'fuel.price_per_mwh'?"),
        ("existing_boiler[2].turndown_ratio", "did you mean"),
        ("site.name", "numeric inputs of this case are"),
        ("fuel", "numeric inputs of this case are"),
        ("", "numeric inputs of this case are record.largest_gap_minutes, record.header_row"),
    ],
)
def test_unknown_path_is_refused_with_an_offer(path, offer):
    """A path that is no numeric input of the case is refused, the nearest offered."""
    with pytest.raises(CaseError, match=rf"no numeric input has this path; ({offer}).*\[C123\]"):
        load_case(CANNERY, {path: 1.0})


def test_every_unknown_path_is_told():
    """Two wrong paths give two problems."""
    with pytest.raises(CaseError, match="C123") as caught:
        load_case(CANNERY, {"fuel.prise": 1.0, "money.horizon": 1.0})
    assert len(caught.value.problems) == 2


def test_changed_value_is_checked_like_a_written_one():
    """A change to what cannot be meant is refused with the range."""
    with pytest.raises(CaseError, match=r"money\.discount_rate_percent: found -100 %/a"):
        load_case(CANNERY, {"money.discount_rate_percent": -100.0})


def test_every_numeric_path_can_be_set_to_the_value_it_has():
    """Each path that the program offers is one that it accepts, with the value the file states."""
    raw = tomllib.loads((CANNERY / "case.toml").read_text())
    stated = {
        "steam.blowdown_percent": raw["steam"]["blowdown_percent"],
        "plan.step_minutes": raw["plan"]["step_minutes"],
        f"{BOILER_2}.efficiency_points[1].load_percent": 70.0,
    }
    assert set(stated) <= set(numeric_paths(raw))
    assert load_case(CANNERY, stated) == load_case(CANNERY)
    assert len(numeric_paths(raw)) > 100
