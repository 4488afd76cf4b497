"""The JSON document: complete, in trade units, honest about what there is not, reproducible."""

from __future__ import annotations

import dataclasses
import json
import math
from typing import Any

import pytest

from evenfire.appraisal.results import Appraisal
from evenfire.report.document import document, document_text

ASKED_KEYS = {
    "name",
    "net_present_cost",
    "investment",
    "fuel_mwh_per_year",
    "fuel_saved_mwh_per_year",
    "payback_years",
    "payback_note",
    "discounted_payback_years",
    "burner_starts_per_year",
    "unmet_steam_t_per_year",
    "boilers",
    "vessel_volume_m3",
    "charged_pressure_bar_abs",
    "discharged_pressure_bar_abs",
    "gap",
    "bound",
    "solver_status",
}


@pytest.fixture(scope="module")
def read_back(appraisal: Appraisal) -> dict[str, Any]:
    """The document as another program reads it, refusing what strict JSON does not know."""

    def refuse(word: str) -> float:
        raise AssertionError(f"{word} is not JSON")

    content: dict[str, Any] = json.loads(document_text(appraisal), parse_constant=refuse)
    return content


def alternative(content: dict[str, Any], name: str) -> dict[str, Any]:
    return next(each for each in content["alternatives"] if each["name"] == name)


def test_every_alternative_carries_every_asked_key(read_back: dict[str, Any]) -> None:
    """Planned or not, an alternative has the keys that programs rely on."""
    assert read_back["schema_version"] == 1
    assert len(read_back["alternatives"]) == 6
    for each in read_back["alternatives"]:
        assert each.keys() >= ASKED_KEYS
    assert len({tuple(each) for each in read_back["alternatives"]}) == 1


def test_vessel_stands_with_volume_and_window(read_back: dict[str, Any]) -> None:
    """A vessel is named by volume and absolute pressures; without one the volume is nothing."""
    storage, as_is = alternative(read_back, "storage"), alternative(read_back, "as is")
    assert storage["vessel_volume_m3"] == 36.4
    assert (storage["charged_pressure_bar_abs"], storage["discharged_pressure_bar_abs"]) == (
        13.01325,
        5.61325,
    )
    assert as_is["vessel_volume_m3"] == 0.0
    assert as_is["charged_pressure_bar_abs"] is None


def test_missing_payback_is_null_with_a_note(read_back: dict[str, Any]) -> None:
    """Where there is no payback, null stands with the reason in words."""
    further = alternative(read_back, "further boiler")
    assert further["payback_years"] == 9.0
    assert further["discounted_payback_years"] is None
    assert further["payback_note"] == "does not pay back when discounted"
    assert alternative(read_back, "storage")["payback_note"] == ""


def test_alternative_without_a_plan_has_no_numbers(read_back: dict[str, Any]) -> None:
    """No number of an alternative without a plan could be taken for a result."""
    unplanned = alternative(read_back, "no gas")
    assert unplanned["standing"] == "infeasible"
    assert unplanned["note"] == "the catalogue holds no electric boiler"
    assert [key for key, value in unplanned.items() if isinstance(value, float | int)] == []


def test_prices_read_back_as_they_were_stated(read_back: dict[str, Any]) -> None:
    """Prices held per joule and kilogram come back per MWh of the stated basis and per tonne."""
    inputs = read_back["inputs"]
    assert inputs["fuel"]["price_per_mwh"] == 46.0  # gross: net price per joule times 0.9
    assert inputs["fuel"]["carbon_price_per_t"] == 70.0
    assert inputs["fuel"]["co2_kg_per_mwh_lhv"] == 201.6  # 56 kg/GJ times 3.6
    assert inputs["money"]["electricity_price_per_mwh"] == 140.0
    assert inputs["money"]["water_price_per_m3"] == 2.6
    assert inputs["money"]["fan_and_pump_kwh_per_t_steam"] == 3.5
    assert inputs["vessel"]["windows_bar_g"] == ["8.5 to 4.6", "12 to 4.6"]
    assert inputs["steam"]["process_pressure_bar_g"] == 4.0
    assert inputs["steam"]["feedwater_temperature_degc"] == 103.0
    assert [boiler["rating_kg_h"] for boiler in inputs["boilers"]] == [5000.0, 2500.0, 4000.0, 5000.0, 8000.0]
    assert [boiler["installed_cost"] for boiler in inputs["boilers"]][:3] == [None, None, 265_000.0]


def test_record_and_storage_need_are_in_tonnes_and_hours(read_back: dict[str, Any]) -> None:
    """The record's facts and the curve's breakpoints are in t, t/h and h."""
    assert read_back["record"]["peak_t_h"] == pytest.approx(11.8, abs=1e-9)
    assert read_back["record"]["step_minutes"] == 1.0
    assert read_back["storage_need"]["breakpoints"][1] == {"capacity_t_h": 5.0, "storage_t": 4.5}
    interval = read_back["storage_need"]["intervals"][0]
    assert interval["steam_t"] - 5.0 * interval["duration_h"] == pytest.approx(4.5, abs=1e-9)
    weights = [day["days_per_year"] for day in read_back["typical_days"]["days"]]
    assert sum(weights) == pytest.approx(365.0, abs=1e-9)


def test_no_time_of_the_run_is_in_the_document(appraisal: Appraisal) -> None:
    """Timings do not reach the document, so a slower machine writes the same bytes."""
    slower = dataclasses.replace(
        appraisal,
        alternatives=tuple(
            dataclasses.replace(each, solve_seconds=99.0 + each.solve_seconds)
            for each in appraisal.alternatives
        ),
    )
    assert document_text(slower) == document_text(appraisal)


def test_last_digits_of_floats_do_not_show(appraisal: Appraisal) -> None:
    """Noise in the fifteenth digit, as another machine might have, leaves the bytes unchanged."""
    noisy = dataclasses.replace(
        appraisal,
        alternatives=tuple(
            dataclasses.replace(each, co2_t_per_year=each.co2_t_per_year * (1.0 + 2e-15))
            for each in appraisal.alternatives
        ),
    )
    assert document_text(noisy) == document_text(appraisal)


def test_bound_that_is_not_finite_is_null(appraisal: Appraisal) -> None:
    """A search that proved nothing has no bound, and JSON has no infinity."""
    first = dataclasses.replace(appraisal.alternatives[0], bound=-math.inf)
    unproven = dataclasses.replace(appraisal, alternatives=(first, *appraisal.alternatives[1:]))
    assert document(unproven)["alternatives"][0]["bound"] is None
    assert "Infinity" not in document_text(unproven)


def test_cautions_and_what_repeats_the_run_stand_in_the_document(read_back: dict[str, Any]) -> None:
    """Cautions, hashes, versions and the command travel with the numbers."""
    assert any("kill" in caution for caution in read_back["cautions"])
    assert read_back["input_hashes_sha256"].keys() == {"case.toml", "steam.csv"}
    assert read_back["command"] == "evenfire appraise 'cases/retort hall'"
    assert read_back["versions"]["evenfire"] == "0.1.0"
    codes = {notice["code"] for notice in read_back["notices"]}
    assert codes == {"C190", "R145", "R190", "R191", "A190", "A191"}
