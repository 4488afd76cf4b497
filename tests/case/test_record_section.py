"""What a case says of its record reaches the reader of records."""

from __future__ import annotations

from pathlib import Path

import pytest

from evenfire.case.load import load_case
from evenfire.demand.read import demand_record
from evenfire.demand.record_format import HeatMeter, Meter, RecordFormat

UNIT = 'flow_unit = "kg/h"'
STATED = """\
flow_unit = "t/h"
gaps = "hold"
largest_gap_minutes = 15.0
clock_column = "clock"
sheet = "Log"
header_row = 3
delimiter = ";"
decimal = ","
encoding = "cp1252"
date_order = "dmy"
zone = "Europe/Berlin"
stamp = "start"
logging = "on change"
step_seconds = 60.0
further_meters = [{ column = "second", factor = -1.0 }]
status_column = "status"
good_status = ["Good"]
missing_values = ["Bad", "-9999"]
negative_flow = "zero\""""


def test_everything_stated_reaches_the_format(write_example):
    """Each key of [record] arrives, minutes as seconds and texts as they are."""
    form = load_case(write_example((UNIT, STATED))).record_format
    assert form == RecordFormat(
        time_column="time",
        flow_column="steam_kg_h",
        flow_unit="t/h",
        gaps="hold",
        largest_gap_s=900.0,
        clock_column="clock",
        sheet="Log",
        header_row=3,
        delimiter=";",
        decimal=",",
        encoding="cp1252",
        date_order="dmy",
        zone="Europe/Berlin",
        stamp="start",
        logging="on change",
        step_s=60.0,
        further_meters=(Meter(column="second", factor=-1.0),),
        status_column="status",
        good_status=("Good",),
        missing_values=("Bad", "-9999"),
        negative_flow="zero",
    )


def test_tab_is_a_delimiter(write_example):
    """White space in a text is kept: a tab between the columns stays a tab."""
    assert load_case(write_example((UNIT, f'{UNIT}\ndelimiter = "\\t"'))).record_format.delimiter == "\t"


def test_fuel_meter_in_si(write_example):
    """kJ/kg, percent and kWh/m3 arrive as J/kg, a fraction and J/m3."""
    meter = (
        'flow_unit = "m3/h"\n'
        "heat_meter = { heat_kj_per_kg = 2330, boiler_efficiency_percent = 80,"
        " calorific_value_kwh_per_m3 = 11.2 }"
    )
    heat = load_case(write_example((UNIT, meter))).record_format.heat
    assert heat == HeatMeter(
        heat_j_per_kg=2.33e6, boiler_efficiency=0.8, fuel_j_per_m3=pytest.approx(40.32e6)
    )


def test_heat_per_kilogram_left_out_is_that_of_the_site(write_example):
    """Steam at 8 bar g (2773.1 kJ/kg) less water at 103 degC (432.3 kJ/kg) is 2341 kJ/kg (IF97)."""
    case = load_case(write_example((UNIT, 'flow_unit = "kW"\nheat_meter = {}')))
    assert case.record_format.heat.heat_j_per_kg == pytest.approx(2.3408e6, rel=2e-4)
    assert any(
        notice.text.startswith("record, heat_meter.heat_kj_per_kg: not stated") for notice in case.notices
    )


def test_heat_unit_without_its_meter_is_told_with_the_case(write_example, problems_of):
    """kW cannot be steam without the heat per kilogram, and the case file is named."""
    (line,) = problems_of(write_example((UNIT, 'flow_unit = "kW"')))
    assert line.startswith("case.toml: record: heat meter: unit 'kW' without a heat meter's data")
    assert line.endswith("[R128]")


def test_both_cases_read_their_records():
    """The records of the two cases are read by the format that their cases state."""
    cases = Path(__file__).parents[2] / "cases"
    for name, step_s in (("cannery", 60.0), ("dyehouse", 900.0)):
        case = load_case(cases / name)
        record = demand_record(case.record_file, case.record_format)
        assert record.step_s == step_s
        assert record.days == pytest.approx(56.0)
