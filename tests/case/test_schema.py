"""The JSON Schema says of every key what a person needs to fill it in."""

from __future__ import annotations

import json
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from evenfire.case.schema import CaseFile, case_json_schema
from evenfire.case.schema_section import unit_of

CASES = Path(__file__).parents[2] / "cases"
SUFFIXES = {
    "bar_g": "bar g",
    "bar": "bar",
    "percent": "%",
    "kg_h": "kg/h",
    "kw": "kW",
    "m3": "m3",
    "minutes": "min",
    "seconds": "s",
    "years": "a",
    "degc": "degC",
    "trials": "1",
    "scenarios": "1",
    "correlation_with_fuel_price": "1",
    "kwh": "kWh/start",
    "kwh_lhv": "kWh/start",
    "w_m2_k": "W/(m2 K)",
    "rate_percent": "%/a",
    "percent_per_year": "%/a",
    "percent_per_bar": "%/bar",
    "percent_per_k": "%/K",
    "percent_per_minute": "% of rating/min",
    "t_per_year": "t/a",
    "kwh_per_t_steam": "kWh/t",
    "kg_m2_h_per_bar": "kg/(m2 h bar)",
    "kg_per_gj_lhv": "kg/GJ",
    "price_per_mwh": "currency/MWh",
    "price_per_t": "currency/t",
    "price_per_m3": "currency/m3",
    "carbon_price_per_t": "currency/t CO2",
    "installed_cost": "currency",
    "wear_cost": "currency/start",
    "maintenance_per_year": "currency/a",
    "kj_per_kg": "kJ/kg",
    "kwh_per_m3": "kWh/m3",
    "rollover": "flow_unit",
    "row": "1",
    "steam_kg": "kg",
    "mass_kg": "kg",
    "hours": "h",
    "kj_per_kg_k": "kJ/(kg K)",
    "rise_k": "K",
    "units": "1",
    "seed": "1",
    "weeks": "1",
    "batches_per_shift": "1",
    "held_phases": "1",
    "factor": "1",
    "ratio": "1",
    "exponent": "1",
    "lhv_to_hhv": "1",
}


def tables(schema: dict[str, Any]) -> Iterator[dict[str, Any]]:
    """Every table of the schema, the whole case first."""
    yield schema
    yield from schema["$defs"].values()


def test_schema_is_json():
    """It can be written to a file for an editor, and names the draft it follows."""
    assert json.loads(json.dumps(case_json_schema()))["$schema"].endswith("2020-12/schema")


def test_every_table_refuses_unknown_keys_and_every_key_is_described():
    """An editor can warn of unknown keys and show a sentence for each known one."""
    schema = case_json_schema()
    for table in tables(schema):
        assert table["additionalProperties"] is False
        for name, key in table["properties"].items():
            described = key if "description" in key else schema["$defs"][key["$ref"].rsplit("/", 1)[1]]
            assert described["description"].endswith("."), name


def test_schema_knows_no_null():
    """TOML has no null, so the schema offers none."""
    assert "null" not in json.dumps(case_json_schema())


def test_the_cases_use_only_keys_of_the_schema():
    """Section by section, each key of the two cases stands in the schema."""
    schema = case_json_schema()
    for case in ("cannery", "dyehouse"):
        raw = tomllib.loads((CASES / case / "case.toml").read_text())
        assert set(raw) <= set(schema["properties"])


@pytest.mark.parametrize("table", [table["title"] for table in tables(case_json_schema())])
def test_every_number_ends_in_its_unit(table):
    """The suffix of a numeric key and the unit that the schema declares are the same."""
    schema = next(each for each in tables(case_json_schema()) if each["title"] == table)
    for name, key in schema["properties"].items():
        if "unit" not in key:
            continue
        suffix = max((each for each in SUFFIXES if name.endswith(each)), key=len, default="")
        assert suffix, f"{name} ends in no known unit"
        assert SUFFIXES[suffix] == key["unit"], name


def test_every_number_has_a_range():
    """No number of a case is accepted without limits."""
    for table in tables(case_json_schema()):
        for name, key in table["properties"].items():
            if "unit" in key:
                assert key.keys() & {"minimum", "exclusiveMinimum"}, name
                assert key.keys() & {"maximum", "exclusiveMaximum"}, name


def test_whole_case_needs_its_main_sections():
    """What cannot be assumed is required: site, steam, fuel, boilers, money."""
    required = {name for name, field in CaseFile.model_fields.items() if field.is_required()}
    assert required == {"site", "steam", "fuel", "existing_boiler", "money"}
    assert all(unit_of(field) == "" for field in CaseFile.model_fields.values())
