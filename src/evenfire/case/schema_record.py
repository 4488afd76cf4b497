"""The record section of a case file: what the columns of the site's steam record mean."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_section import Section, entry, quantity

FlowUnit = Literal[
    "kg/h", "t/h", "lb/h", "kg/s", "kg", "t", "lb", "kg/step", "t/step", "lb/step", "kW", "MW", "m3/h"
]
FROM_THE_FILE = "read from the file, which is refused where it can be read in two ways"


class FurtherMeter(Section):
    """A further flow column, added to the first or taken from it."""

    column: Annotated[str, entry("Column of the further meter, in the same unit.", shortest=1)]
    factor: Annotated[
        float,
        quantity(
            "1",
            "1 adds the column, -1 takes it away; other factors for a share.",
            at_least=-10.0,
            at_most=10.0,
        ),
    ]


class HeatMeter(Section):
    """How steam follows from a meter of heat or fuel."""

    heat_kj_per_kg: Annotated[
        float | None,
        quantity(
            "kJ/kg",
            "Heat taken up per kilogram of steam: enthalpy of steam less that of feedwater.",
            at_least=1000.0,
            at_most=4000.0,
            when_left_out="dry steam at steam.boiler_pressure_bar_g from steam.feedwater_temperature_degc",
        ),
    ] = None
    boiler_efficiency_percent: Annotated[
        float | None,
        quantity(
            "%",
            "Heat in steam over heat in fuel, on the basis the fuel meter counts on; left out for a meter of"
            " heat in steam.",
            at_least=30.0,
            at_most=110.0,
        ),
    ] = None
    calorific_value_kwh_per_m3: Annotated[
        float | None,
        quantity(
            "kWh/m3",
            "Calorific value of the metered gas on the same basis; for a meter in m3/h.",
            above=0.0,
            at_most=100.0,
        ),
    ] = None


class Record(Section):
    """The measured steam demand: delimited text (plain or .gz), .xlsx or .parquet beside the case."""

    file: Annotated[str, entry("Name of the record file, relative to the case file.", shortest=1)]
    time_column: Annotated[str, entry("Column with the local time of each step.", shortest=1)]
    flow_column: Annotated[str, entry("Column with the steam flow, or what steam follows from.", shortest=1)]
    flow_unit: Annotated[
        FlowUnit,
        entry(
            "Unit of the flow column: a mean flow (kg/h, t/h, lb/h, kg/s), a counter that only rises (kg, t,"
            " lb), steam per step (kg/step, t/step, lb/step), or heat or fuel (kW, MW, m3/h), which needs"
            " heat_meter."
        ),
    ]
    gaps: Annotated[
        Literal["refuse", "hold", "interpolate", "zero"],
        entry(
            "What to do where values are missing: 'refuse' the record, 'hold' the last value, 'interpolate'"
            " between the values on both sides, or 'zero' where the plant stood still. What was filled is"
            " reported."
        ),
    ] = "refuse"
    largest_gap_minutes: Annotated[
        float | None,
        quantity(
            "min",
            "Longest gap that may be filled; must be stated unless gaps = 'refuse'.",
            above=0.0,
            at_most=100_000.0,
        ),
    ] = None
    clock_column: Annotated[
        str, entry("Column of the time of day, where time_column holds the date alone.")
    ] = ""
    sheet: Annotated[
        str, entry("Sheet of a workbook.", when_left_out="the only sheet; several are refused")
    ] = ""
    header_row: Annotated[
        int, quantity("1", "Row of the column names, as an editor counts.", at_least=1, at_most=1000)
    ] = 1
    delimiter: Annotated[
        str, entry("Character between the columns of a text file.", when_left_out=FROM_THE_FILE)
    ] = ""
    decimal: Annotated[
        Literal[".", ","] | None, entry("Decimal sign of a text file.", when_left_out=FROM_THE_FILE)
    ] = None
    encoding: Annotated[
        str, entry("Encoding of a text file, such as 'utf-8' or 'cp1252'.", when_left_out=FROM_THE_FILE)
    ] = ""
    date_order: Annotated[
        Literal["ymd", "dmy", "mdy"] | None,
        entry("Order of year, month and day in a date.", when_left_out=FROM_THE_FILE),
    ] = None
    zone: Annotated[
        str,
        entry(
            "Time zone of the stamps, such as 'Europe/Berlin', or 'fixed' for a clock that is not changed to"
            " summer time.",
            when_left_out=FROM_THE_FILE,
        ),
    ] = ""
    stamp: Annotated[
        Literal["start", "end"], entry("Whether a time stamp stands at the start or the end of its step.")
    ] = "start"
    logging: Annotated[
        Literal["regular", "on change"],
        entry("'regular', or 'on change' where a value holds until the next row."),
    ] = "regular"
    step_seconds: Annotated[
        float | None,
        quantity(
            "s",
            "Step onto which a record logged on change is averaged; left out for a regular one.",
            above=0.0,
            at_most=86_400.0,
        ),
    ] = None
    further_meters: Annotated[
        tuple[FurtherMeter, ...], entry("Further flow columns to add or to take away.")
    ] = ()
    status_column: Annotated[str, entry("Column that says whether a value is good.")] = ""
    good_status: Annotated[
        tuple[str, ...],
        entry("Words in status_column that mean a good value; rows with others count as missing."),
    ] = ()
    missing_values: Annotated[
        tuple[str, ...], entry("Cells that mean no value, such as 'Bad' or '-9999'.")
    ] = ()
    negative_flow: Annotated[
        Literal["refuse", "zero"], entry("'refuse' negative flow, or take it as 'zero'.")
    ] = "refuse"
    counter_rollover: Annotated[
        float | None,
        quantity(
            "flow_unit", "Reading after which the counter starts again at 0.", above=0.0, at_most=1.0e15
        ),
    ] = None
    deaerator_inlet_temperature_degc: Annotated[
        float | None,
        quantity(
            "degC",
            "Water into the deaerator, where the meter sits behind the branch that heats the deaerator with"
            " boiler steam: the record is then raised by the steam that this takes.",
            at_least=1.0,
            at_most=300.0,
            when_left_out="the record is all steam the boilers make",
        ),
    ] = None
    heat_meter: Annotated[
        HeatMeter | None, entry("How steam follows from the meter; needed for kW, MW and m3/h.")
    ] = None
