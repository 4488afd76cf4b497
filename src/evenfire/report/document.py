"""An appraisal as one JSON document with a versioned schema and reproducible bytes."""

from __future__ import annotations

import json
import math
from typing import Any

from evenfire.appraisal.results import (
    AlternativeResult,
    Appraisal,
    BoilerUse,
    CostLine,
    Payback,
    Replayed,
    VesselChoice,
    WholeRecord,
)
from evenfire.case.case import Case
from evenfire.demand.enough_days import DayErrors
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.demand.statistics import demand_statistics
from evenfire.errors import Notice
from evenfire.report.cautions import CAUTIONS
from evenfire.report.notices import all_notices
from evenfire.report.replay_document import replay_entry
from evenfire.report.trade_units import (
    SECONDS_PER_MINUTE,
    boiler_quantities,
    input_sections,
    repeating_command,
)
from evenfire.units import KG_PER_TONNE, SECONDS_PER_HOUR, kg_s_to_t_h

SCHEMA_VERSION = 1
SIGNIFICANT_DIGITS = 12


def document_text(appraisal: Appraisal) -> str:
    """The JSON document of an appraisal as text, ending in a line feed.

    The same appraisal gives the same bytes: fixed order of keys, no times of day or durations, numbers
    rounded to twelve significant digits.
    """
    return json.dumps(document(appraisal), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def document(appraisal: Appraisal) -> dict[str, Any]:
    """An appraisal as plain data: numbers in the trade units that their keys name.

    ``null`` stands where there is no number: an alternative without a plan, a payback that does not
    exist (``payback_note`` says why), a bound that is not finite. Dispatch is in the CSV table.
    """
    case = appraisal.case
    content: dict[str, Any] = rounded(
        {
            "schema_version": SCHEMA_VERSION,
            "site": case.name,
            "question": case.question,
            "verdict": appraisal.verdict,
            "best": appraisal.best,
            "reference": appraisal.reference,
            "currency": case.finance.currency,
            "price_date": case.finance.price_date,
            "fuel_basis": appraisal.fuel_basis,
            "cautions": list(CAUTIONS),
            "alternatives": [_alternative(each) for each in appraisal.alternatives],
            "record": _record(appraisal.record),
            "typical_days": _typical_days(appraisal.typical_days, appraisal.day_errors),
            "storage_need": _storage_need(appraisal.storage_need),
            "inputs": _inputs(case),
            "notices": [_notice(each) for each in all_notices(appraisal)],
            "command": repeating_command(appraisal),
            "input_hashes_sha256": dict(case.input_hashes),
            "versions": dict(appraisal.versions),
        }
    )
    return content


def _alternative(result: AlternativeResult) -> dict[str, Any]:
    vessel = result.vessel
    document: dict[str, Any] = {
        "name": result.name,
        "standing": result.standing.value,
        "note": result.note,
        "solver_status": result.solver_status,
        "net_present_cost": result.net_present_cost,
        "bound": result.bound,
        "gap": result.gap,
        "investment": result.investment,
        "net_present_saving": result.net_present_saving,
        "steam_cost_per_t": result.steam_cost_per_t,
        "fuel_mwh_per_year": result.fuel_mwh_per_year,
        "fuel_saved_mwh_per_year": result.fuel_saved_mwh_per_year,
        "fuel_saved_percent": result.fuel_saved_percent,
        "co2_t_per_year": result.co2_t_per_year,
        "co2_saved_t_per_year": result.co2_saved_t_per_year,
        "steam_t_per_year": result.steam_t_per_year,
        "burner_starts_per_year": result.burner_starts_per_year,
        "firing_hours_per_year": result.firing_hours_per_year,
        "unmet_steam_t_per_year": result.unmet_steam_t_per_year,
        "vented_steam_t_per_year": result.vented_steam_t_per_year,
        "record_shortfall_t": result.record_shortfall_t,
        "boiler_working_pressure_bar_abs": result.boiler_working_bar_abs,
        "vessel_volume_m3": vessel.volume_m3 if vessel is not None else 0.0,
    }
    document |= {"replay": None, "planned": None}
    if result.replayed is not None:
        document |= _replayed_headline(result, result.replayed) | {"planned": _planned(result)}
    if not result.planned:
        known = ("name", "standing", "note", "solver_status", "bound")
        document = {key: value if key in known else None for key, value in document.items()}
    return document | {
        "charged_pressure_bar_abs": vessel.charged_bar_abs if vessel is not None else None,
        "discharged_pressure_bar_abs": vessel.discharged_bar_abs if vessel is not None else None,
        **_payback(result.payback if result.replayed is None else result.replayed.payback),
        "boilers": [_boiler(each) for each in result.boilers],
        "vessel": _vessel(vessel) if vessel is not None else None,
        "typical_days_difference_percent": (
            None if result.typical_days_difference is None else 100.0 * result.typical_days_difference
        ),
        "whole_record": None if result.whole_record is None else _whole_record(result.whole_record),
        "cost_lines": [_cost_line(each) for each in result.headline_cost_lines],
        "fuel_parts_mwh_per_year": {part.name: part.mwh_per_year for part in result.headline_fuel_parts},
    }


def _payback(payback: Payback) -> dict[str, Any]:
    return {
        "payback_years": payback.simple_years,
        "discounted_payback_years": payback.discounted_years,
        "payback_note": payback.note,
    }


def _replayed_headline(result: AlternativeResult, run: Replayed) -> dict[str, Any]:
    """Figures of the replay, which stand in the place of the plan's."""
    return {
        "net_present_cost": run.net_present_cost,
        "net_present_saving": run.net_present_saving,
        "fuel_mwh_per_year": run.fuel_mwh_per_year,
        "fuel_saved_mwh_per_year": run.fuel_saved_mwh_per_year,
        "fuel_saved_percent": run.fuel_saved_percent,
        "co2_t_per_year": run.co2_t_per_year,
        "co2_saved_t_per_year": run.co2_saved_t_per_year,
        "steam_t_per_year": run.steam_t_per_year,
        "steam_cost_per_t": run.steam_cost_per_t,
        "burner_starts_per_year": run.burner_starts_per_year,
        "firing_hours_per_year": run.firing_hours_per_year,
        "unmet_steam_t_per_year": run.unmet_steam_t_per_year,
        "vented_steam_t_per_year": run.vented_steam_t_per_year,
        "replay": replay_entry(result, run),
    }


def _planned(result: AlternativeResult) -> dict[str, Any]:
    """The plan of the same plant: what foresight would reach."""
    return {
        "net_present_cost": result.net_present_cost,
        "net_present_saving": result.net_present_saving,
        "steam_cost_per_t": result.steam_cost_per_t,
        "fuel_mwh_per_year": result.fuel_mwh_per_year,
        "fuel_saved_mwh_per_year": result.fuel_saved_mwh_per_year,
        "fuel_saved_percent": result.fuel_saved_percent,
        "co2_t_per_year": result.co2_t_per_year,
        "co2_saved_t_per_year": result.co2_saved_t_per_year,
        "steam_t_per_year": result.steam_t_per_year,
        "burner_starts_per_year": result.burner_starts_per_year,
        "firing_hours_per_year": result.firing_hours_per_year,
        "unmet_steam_t_per_year": result.unmet_steam_t_per_year,
        "vented_steam_t_per_year": result.vented_steam_t_per_year,
        **_payback(result.payback),
        "cost_lines": [_cost_line(each) for each in result.cost_lines],
        "fuel_parts_mwh_per_year": {part.name: part.mwh_per_year for part in result.fuel_parts},
    }


def _whole_record(whole: WholeRecord) -> dict[str, Any]:
    return {
        "step_s": whole.step_s,
        "days": whole.days,
        "net_present_cost": whole.net_present_cost,
        "bound": whole.bound,
        "gap": whole.gap,
        "boilers": list(whole.boilers),
        "vessel_volume_m3": whole.vessel_volume_m3,
        "stopped": whole.stopped,
    }


def _boiler(boiler: BoilerUse) -> dict[str, Any]:
    return {
        "name": boiler.name,
        "rating_kg_h": boiler.rating_kg_h,
        "existing": boiler.existing,
        "steam_t_per_year": boiler.steam_t_per_year,
        "firing_hours_per_year": boiler.firing_hours_per_year,
        "burner_starts_per_year": boiler.burner_starts_per_year,
    }


def _vessel(vessel: VesselChoice) -> dict[str, Any]:
    return {
        "volume_m3": vessel.volume_m3,
        "charged_pressure_bar_abs": vessel.charged_bar_abs,
        "discharged_pressure_bar_abs": vessel.discharged_bar_abs,
        "steam_capacity_kg": vessel.steam_capacity_kg,
        "release_limit_kg_h": vessel.release_limit_kg_h,
        "standing_loss_kw": vessel.standing_loss_kw,
        "diameter_m": vessel.diameter_m,
        "cylinder_length_m": vessel.cylinder_length_m,
        "wall_thickness_mm_for_cost_only": vessel.wall_thickness_mm,
        "shell_mass_t_for_cost_only": vessel.shell_mass_t,
    }


def _cost_line(line: CostLine) -> dict[str, Any]:
    return {"name": line.name, "per_year": line.per_year, "present_cost": line.present_cost}


def _record(record: DemandRecord) -> dict[str, Any]:
    found = demand_statistics(record)
    return {
        "source": record.source,
        "start": record.start.isoformat(),
        "step_minutes": record.step_s / SECONDS_PER_MINUTE,
        "steps": int(record.flow_kg_s.size),
        "days": found.days,
        "steam_t": found.steam_kg / KG_PER_TONNE,
        "mean_t_h": kg_s_to_t_h(found.mean_kg_s),
        "lowest_t_h": kg_s_to_t_h(found.lowest_kg_s),
        "peak_t_h": kg_s_to_t_h(found.peak_kg_s),
        "load_factor": found.load_factor,
        "steepest_rise_t_h_per_minute": kg_s_to_t_h(found.steepest_rise_kg_s2) * SECONDS_PER_MINUTE,
    }


def _typical_days(typical: TypicalDays, errors: DayErrors) -> dict[str, Any]:
    return {
        "step_minutes": typical.step_s / SECONDS_PER_MINUTE,
        "energy_error": typical.energy_error,
        "duration_curve_error": typical.duration_curve_error,
        "peak_error": typical.peak_error,
        "steam_above_boilers_error": errors.peak_steam,
        "time_above_boilers_error": errors.peak_time,
        "cost_error": errors.cost,
        "days": [
            {
                "name": day.name,
                "date": day.date.isoformat(),
                "days_per_year": day.days_per_year,
                "mean_t_h": kg_s_to_t_h(float(day.flow_kg_s.mean())),
                "peak_t_h": kg_s_to_t_h(float(day.flow_kg_s.max())),
            }
            for day in typical.days
        ],
    }


def _storage_need(need: StorageNeed) -> dict[str, Any]:
    return {
        "breakpoints": [
            {"capacity_t_h": kg_s_to_t_h(float(capacity)), "storage_t": float(storage) / KG_PER_TONNE}
            for capacity, storage in zip(need.capacity_kg_s, need.storage_kg, strict=True)
        ],
        "intervals": [
            {
                "steam_t": piece.energy_kg / KG_PER_TONNE,
                "duration_h": piece.duration_s / SECONDS_PER_HOUR,
                "first_step": piece.first_step,
                "last_step": piece.last_step,
            }
            for piece in need.pieces
        ],
    }


def _inputs(case: Case) -> dict[str, Any]:
    sections: dict[str, Any] = {
        section: {quantity.key: quantity.value for quantity in quantities}
        for section, quantities in input_sections(case)
    }
    sections["boilers"] = [
        {quantity.key: quantity.value for quantity in boiler_quantities(offer)} | {"existing": offer.existing}
        for offer in case.boilers
    ]
    return sections


def _notice(notice: Notice) -> dict[str, str]:
    return {"code": notice.code, "severity": notice.severity, "text": notice.text}


def rounded(value: Any) -> Any:
    """Plain data with floats rounded to twelve digits and ``None`` for those that are not finite."""
    if isinstance(value, dict):
        return {key: rounded(each) for key, each in value.items()}
    if isinstance(value, list | tuple):
        return [rounded(each) for each in value]
    if isinstance(value, float):
        return float(f"{value:.{SIGNIFICANT_DIGITS}g}") + 0.0 if math.isfinite(value) else None
    return value
