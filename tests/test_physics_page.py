"""docs/physics.md: its worked examples run, its numbers and its guards are current."""

import doctest
import re
from pathlib import Path

import pytest

from evenfire.accumulator import steam_capacity_kg
from evenfire.boiler import FUEL_KINDS, fuel_spec, siegert_coefficients
from evenfire.errors import OutOfRangeError
from evenfire.water import saturation

ROOT = Path(__file__).parents[1]
PAGE = (ROOT / "docs" / "physics.md").read_text(encoding="utf-8")


def table_under(heading: str) -> list[list[str]]:
    """Cells of the first table under a heading, without its two header lines."""
    section = PAGE.split(f"### {heading}\n", 1)[1].split("\n### ", 1)[0]
    lines = [line for line in section.splitlines() if line.startswith("|")]
    return [[cell.strip() for cell in line.strip("|").split("|")] for line in lines[2:]]


def test_worked_examples_run():
    """Every example on the page gives what it prints."""
    failed, run = doctest.testfile(str(ROOT / "docs" / "physics.md"), module_relative=False)
    assert run > 10
    assert failed == 0


def test_flash_formula_table_is_current():
    """Capacities and the flash formula's errors are what the program computes."""
    rows = table_under("The one-line flash formula and its error")
    assert len(rows) == 7
    for window, *cells in rows:
        charged, discharged = (float(each) for each in window.split(" to "))
        high, low = saturation(charged * 1e5), saturation(discharged * 1e5)
        share = (high.enthalpy_liquid_j_kg - low.enthalpy_liquid_j_kg) / (
            low.enthalpy_vapour_j_kg - low.enthalpy_liquid_j_kg
        )
        for fill, (capacity, error) in zip((0.90, 0.75), (cells[:2], cells[2:]), strict=True):
            ours = steam_capacity_kg(1.0, charged, discharged, fill)
            flash = float(share * high.density_liquid_kg_m3) * fill
            assert f"{ours:.2f}" == capacity
            assert f"{100 * (flash / ours - 1):+.2f} %" == error


def test_fuel_tables_are_current():
    """Siegert coefficients and fuel factors on the page are the program's."""
    kinds = {kind.replace("_", " ").replace("lpg", "LPG"): kind for kind in FUEL_KINDS}
    for name, a1, a2, b, _ in table_under("Stack loss"):
        coefficients = siegert_coefficients(kinds[name.split(",")[0]])
        assert (coefficients.a1, coefficients.a2, coefficients.b) == (float(a1), float(a2), float(b))
    for name, ratio, co2, _ in table_under("Fuels"):
        fuel = fuel_spec(kinds[name])
        assert fuel.lhv_to_hhv == pytest.approx(float(ratio), abs=6e-6)
        assert fuel.co2_kg_per_j_lhv * 1e9 == pytest.approx(float(co2.split()[0]))
    with pytest.raises(OutOfRangeError, match="P115"):
        siegert_coefficients("electricity")


def test_named_guards_exist():
    """Every test file that the page names is there."""
    named = set(re.findall(r"`((?:tests/|published/|boiler/|accumulator/|properties/)?test_\w+\.py)`", PAGE))
    assert len(named) > 8
    for name in named:
        places = [ROOT / "tests" / name.removeprefix("tests/"), ROOT / "tests" / "accumulator" / name]
        assert any(place.is_file() for place in places), name
