"""The record section of a case as the format that the record is read by."""

from __future__ import annotations

from evenfire.boiler import steam_heat_j_kg
from evenfire.case.assumptions import assumption
from evenfire.case.schema_record import HeatMeter, Record
from evenfire.case.schema_site import Steam
from evenfire.case.water_side import deaerator_share
from evenfire.demand.record_format import HeatMeter as HeatMeterFormat
from evenfire.demand.record_format import Meter, RecordFormat
from evenfire.errors import Notice
from evenfire.units import J_PER_KWH, bar_g_to_pa, degc_to_k

J_PER_KJ = 1000.0
SECONDS_PER_MINUTE = 60.0


def record_format(record: Record, steam: Steam) -> tuple[RecordFormat, tuple[Notice, ...]]:
    """How the record file is to be read, and what was assumed to say so.

    Raises
    ------
    OutOfRangeError
        P101 to P103 where the heat per kilogram must be reckoned from water states outside the tables.
    """
    heat, notices = (None, ()) if record.heat_meter is None else _heat_meter(record.heat_meter, steam)
    return RecordFormat(
        time_column=record.time_column,
        flow_column=record.flow_column,
        flow_unit=record.flow_unit,
        gaps=record.gaps,
        largest_gap_s=(record.largest_gap_minutes or 0.0) * SECONDS_PER_MINUTE,
        clock_column=record.clock_column,
        sheet=record.sheet,
        header_row=record.header_row,
        delimiter=record.delimiter,
        decimal=record.decimal or "",
        encoding=record.encoding,
        date_order=record.date_order or "",
        zone=record.zone,
        stamp=record.stamp,
        logging=record.logging,
        step_s=record.step_seconds or 0.0,
        further_meters=tuple(Meter(column=each.column, factor=each.factor) for each in record.further_meters),
        status_column=record.status_column,
        good_status=record.good_status,
        missing_values=record.missing_values,
        negative_flow=record.negative_flow,
        counter_rollover=record.counter_rollover or 0.0,
        heat=heat,
        share_before_meter=deaerator_share(record.deaerator_inlet_temperature_degc, steam),
    ), notices


def _heat_meter(meter: HeatMeter, steam: Steam) -> tuple[HeatMeterFormat, tuple[Notice, ...]]:
    notices: tuple[Notice, ...] = ()
    if meter.heat_kj_per_kg is None:
        heat_j_per_kg = steam_heat_j_kg(
            bar_g_to_pa(steam.boiler_pressure_bar_g), degc_to_k(steam.feedwater_temperature_degc), 0.0
        )
        shown = f"{heat_j_per_kg / J_PER_KJ:.5g} kJ/kg"
        reason = "dry steam at boiler pressure from feedwater"
        notices = (assumption("record", "heat_meter.heat_kj_per_kg", shown, reason),)
    else:
        heat_j_per_kg = meter.heat_kj_per_kg * J_PER_KJ
    efficiency, calorific = meter.boiler_efficiency_percent, meter.calorific_value_kwh_per_m3
    return HeatMeterFormat(
        heat_j_per_kg=heat_j_per_kg,
        boiler_efficiency=None if efficiency is None else efficiency / 100.0,
        fuel_j_per_m3=None if calorific is None else calorific * J_PER_KWH,
    ), notices
