"""An invented appraisal for tests of the report: plausible numbers, none of them computed by a plan."""

from __future__ import annotations

import dataclasses
import datetime as dt

import numpy as np

from evenfire.appraisal.results import (
    AlternativeResult,
    Appraisal,
    BoilerUse,
    CostLine,
    DaySchedule,
    FuelPart,
    Payback,
    Standing,
    VesselChoice,
)
from evenfire.demand.enough_days import DayErrors
from evenfire.demand.series import DemandRecord, FloatArray, StorageNeed, StorageNeedPiece, TypicalDays
from evenfire.demand.typical_days import typical_days
from evenfire.errors import Notice
from tests.report.made_case import made_case
from tests.report.made_replay import with_replay

STEP_S = 300.0
VESSEL = VesselChoice(
    volume_m3=36.4,
    charged_bar_abs=13.01325,
    discharged_bar_abs=5.61325,
    steam_capacity_kg=2105.0,
    release_limit_kg_h=25_200.0,
    standing_loss_kw=4.6,
    diameter_m=2.31,
    cylinder_length_m=8.1,
    wall_thickness_mm=14.0,
    shell_mass_t=9.4,
)


def made_record(days: int = 14, seed: int = 7) -> DemandRecord:
    """Short high peaks over a low base on working days, at one minute."""
    random = np.random.default_rng(seed)
    flow_t_h = np.full(days * 1440, 0.5) + random.normal(0.0, 0.04, days * 1440)
    for day in range(days):
        weekday = (dt.date(2026, 2, 2) + dt.timedelta(days=day)).weekday()
        if weekday == 6:
            continue
        for minute in range(360, 1320 if weekday < 5 else 840, 45):
            at = day * 1440 + minute + int(random.integers(0, 12))
            length = int(random.integers(6, 12))
            flow_t_h[at : at + length] += random.uniform(4.0, 7.0)
            flow_t_h[at + length : at + length + 25] += random.uniform(1.0, 2.2)
    peak = 9 * 1440 + 600
    flow_t_h[peak : peak + 9] = 11.8
    return DemandRecord(
        start=dt.datetime(2026, 2, 2),
        step_s=60.0,
        flow_kg_s=flow_t_h / 3.6,
        source="steam.csv",
        notices=(
            Notice(code="R190", text="The record covers 14.0 days from 2026-02-02.", severity="warning"),
            Notice(
                code="R191",
                text="12 of 20160 steps (0.06%) were missing, in 2 gaps; filled with the last value before.",
                severity="assumed",
            ),
        ),
    )


def made_storage_need() -> StorageNeed:
    """A convex curve with three pieces, in SI."""
    capacity_t_h = np.array([2.0, 5.0, 8.0, 11.8])
    storage_t = np.array([30.0, 4.5, 0.9, 0.0])
    pieces = tuple(
        StorageNeedPiece(
            energy_kg=1000.0 * float(storage_t[i] + capacity_t_h[i] * hours),
            duration_s=3600.0 * float(hours),
            first_step=13_000,
            last_step=13_000 + int(60 * hours) - 1,
        )
        for i, hours in enumerate(-np.diff(storage_t) / np.diff(capacity_t_h))
    )
    return StorageNeed(capacity_kg_s=capacity_t_h / 3.6, storage_kg=storage_t * 1000.0, pieces=pieces)


def _schedules(
    days: TypicalDays, ratings_t_h: tuple[float, ...], vessel: VesselChoice | None
) -> tuple[DaySchedule, ...]:
    schedules = []
    for day in days.days:
        demand = day.flow_kg_s * 3.6
        hours = days.step_s / 3600.0
        capacity = vessel.steam_capacity_kg / 1000.0 if vessel else 0.0
        output: FloatArray = np.zeros((len(ratings_t_h), demand.size))
        stored, level = np.zeros(demand.size), capacity
        unmet = np.zeros(demand.size)
        state: list[list[str]] = [[] for _ in ratings_t_h]
        for step, asked in enumerate(demand):
            stored[step] = level
            wanted = min(asked, 3.2) if vessel else asked
            if vessel and level < capacity:
                wanted = max(wanted, 2.6)
            for boiler, rating in enumerate(ratings_t_h):
                output[boiler, step] = min(rating, wanted)
                wanted -= output[boiler, step]
                share = output[boiler, step] / rating
                state[boiler].append(
                    "firing"
                    if share >= 0.25
                    else "cycling"
                    if share > 0
                    else "standby"
                    if step > 60
                    else "cold"
                )
            lacking = asked - output[:, step].sum()
            given = min(max(lacking, -(capacity - level) / hours), level / hours)
            level = float(np.clip(level - given * hours, 0.0, capacity))
            unmet[step] = max(lacking - given, 0.0)
        pressure = np.zeros(0)
        if vessel:
            window = vessel.charged_bar_abs - vessel.discharged_bar_abs
            pressure = vessel.discharged_bar_abs + window * stored / capacity
        schedules.append(
            DaySchedule(
                day=day.name,
                date=day.date.isoformat(),
                days_per_year=day.days_per_year,
                step_minutes=days.step_s / 60.0,
                demand_t_h=demand,
                output_t_h=output,
                state=tuple(tuple(each) for each in state),
                stored_t=stored,
                vessel_bar_abs=pressure,
                unmet_t_h=unmet,
                vented_t_h=np.zeros(demand.size),
            )
        )
    return tuple(schedules)


def made_alternative(
    name: str,
    days: TypicalDays,
    boilers: tuple[tuple[str, float, bool], ...],
    *,
    cost: float,
    investment: float = 0.0,
    vessel: VesselChoice | None = None,
    payback: Payback,
    standing: Standing = Standing.PLANNED,
    gap: float = 0.0006,
    unmet: float = 0.0,
) -> AlternativeResult:
    """One planned alternative whose cost lines add up to `cost`."""
    upkeep = 30_000.0 * 8.9
    residual = -0.12 * investment
    energy = cost - investment - residual - upkeep - 400.0 * unmet * 8.6
    return with_replay(
        AlternativeResult(
            name=name,
            standing=standing,
            note="",
            solver_status="asked gap reached" if standing is Standing.PLANNED else "time limit",
            net_present_cost=cost,
            bound=cost * (1.0 - gap),
            gap=gap,
            investment=investment,
            cost_lines=(
                CostLine(name="investment", per_year=0.0, present_cost=investment),
                CostLine(name="residual value", per_year=0.0, present_cost=residual),
                CostLine(name="fuel", per_year=0.7 * energy / 9.1, present_cost=0.7 * energy),
                CostLine(name="carbon", per_year=0.2 * energy / 9.7, present_cost=0.2 * energy),
                CostLine(name="electricity", per_year=0.04 * energy / 9.4, present_cost=0.04 * energy),
                CostLine(name="water", per_year=0.06 * energy / 9.7, present_cost=0.06 * energy),
                CostLine(name="maintenance", per_year=24_000.0, present_cost=0.8 * upkeep),
                CostLine(name="burner starts", per_year=6_000.0, present_cost=0.2 * upkeep),
                CostLine(name="unmet steam", per_year=400.0 * unmet, present_cost=400.0 * unmet * 8.6),
            ),
            fuel_mwh_per_year=14_500.0 - 0.002 * investment,
            fuel_parts=(
                FuelPart(name="steam used", mwh_per_year=13_800.0 - 0.002 * investment),
                FuelPart(name="blowdown", mwh_per_year=350.0),
                FuelPart(name="standing loss", mwh_per_year=300.0),
                FuelPart(name="purging at burner starts", mwh_per_year=60.0),
                FuelPart(name="vessel gives more than it takes", mwh_per_year=-10.0),
            ),
            co2_t_per_year=2640.0,
            steam_t_per_year=17_800.0,
            burner_starts_per_year=1250.0 if vessel else 8600.0,
            firing_hours_per_year=7350.0,
            unmet_steam_t_per_year=unmet,
            vented_steam_t_per_year=0.0,
            fuel_saved_mwh_per_year=0.002 * investment,
            fuel_saved_percent=0.2 * investment / 14_500.0,
            co2_saved_t_per_year=0.0004 * investment,
            net_present_saving=8_900_000.0 - cost,
            payback=payback,
            steam_cost_per_t=cost / 8.56 / 17_800.0,
            boilers=tuple(
                BoilerUse(
                    name=boiler,
                    rating_kg_h=rating_kg_h,
                    existing=existing,
                    steam_t_per_year=17_800.0 / len(boilers),
                    firing_hours_per_year=6400.0,
                    burner_starts_per_year=700.0,
                )
                for boiler, rating_kg_h, existing in boilers
            ),
            boiler_working_bar_abs=13.5 if vessel else 10.01325,
            vessel=vessel,
            record_shortfall_t=0.0 if cost < 8_900_000.0 else 36.2,
            schedule=_schedules(days, tuple(rating / 1000.0 for _, rating, _ in boilers), vessel),
            solve_seconds=12.3,
        )
    )


def made_unplanned(name: str, standing: Standing, note: str) -> AlternativeResult:
    """An alternative without a plan: every number is absent or nothing."""
    return AlternativeResult(
        name=name,
        standing=standing,
        note=note,
        solver_status="infeasible" if standing is Standing.INFEASIBLE else "time limit",
        net_present_cost=None,
        bound=None,
        gap=None,
        investment=0.0,
        cost_lines=(),
        fuel_mwh_per_year=0.0,
        fuel_parts=(),
        co2_t_per_year=0.0,
        steam_t_per_year=0.0,
        burner_starts_per_year=0.0,
        firing_hours_per_year=0.0,
        unmet_steam_t_per_year=0.0,
        vented_steam_t_per_year=0.0,
        fuel_saved_mwh_per_year=0.0,
        fuel_saved_percent=0.0,
        co2_saved_t_per_year=0.0,
        net_present_saving=None,
        payback=Payback(simple_years=None, discounted_years=None, note="no plan"),
        steam_cost_per_t=None,
        boilers=(),
        boiler_working_bar_abs=0.0,
        vessel=None,
        record_shortfall_t=0.0,
        schedule=(),
        solve_seconds=30.0,
    )


def made_appraisal(site: str = "Retort hall (invented)") -> Appraisal:
    """Six alternatives, among them one of every standing."""
    record = made_record()
    days = typical_days(record, STEP_S)
    old_1, old_2 = ("Boiler 1, 5 t/h", 5000.0, True), ("Boiler 2, 2.5 t/h", 2500.0, True)
    alternatives = (
        made_alternative(
            "as is",
            days,
            (old_1, old_2),
            cost=8_900_000.0,
            unmet=310.0,
            payback=Payback(simple_years=None, discounted_years=None, note="the reference"),
        ),
        made_alternative(
            "bigger boiler",
            days,
            (("New boiler 8 t/h", 8000.0, False), old_2),
            cost=8_420_000.0,
            investment=433_400.0,
            payback=Payback(simple_years=4.6, discounted_years=6.1, note=""),
        ),
        made_alternative(
            "further boiler",
            days,
            (old_1, old_2, ("New boiler 4 t/h", 4000.0, False)),
            cost=8_391_000.0,
            investment=291_500.0,
            standing=Standing.GAP_NOT_REACHED,
            gap=0.0141,
            payback=Payback(
                simple_years=9.0, discounted_years=None, note="does not pay back when discounted"
            ),
        ),
        made_alternative(
            "storage",
            days,
            (old_1, old_2),
            cost=8_104_000.0,
            investment=198_700.0,
            vessel=VESSEL,
            payback=Payback(simple_years=1.9, discounted_years=2.2, note=""),
        ),
        made_unplanned("two small boilers", Standing.NO_PLAN, "stopped after 30 s without a feasible plan"),
        made_unplanned("no gas", Standing.INFEASIBLE, "the catalogue holds no electric boiler"),
    )
    return Appraisal(
        case=made_case(site, tuple(each.name for each in alternatives)),
        record=record,
        typical_days=days,
        day_errors=DayErrors(
            energy=0.011, duration_curve=0.02, peak_steam=-0.04, peak_time=0.03, cost=-0.0037
        ),
        storage_need=made_storage_need(),
        alternatives=alternatives,
        reference="as is",
        best="storage",
        verdict="Storage with today's boilers costs least: 8,104,000 EUR over 15 years, 796,000 EUR less "
        "than as is. It pays back in 1.9 years; no other alternative can be cheaper within the proven gaps.",
        fuel_basis="hhv",
        notices=(
            Notice(code="A190", text="Boilers share one working pressure.", severity="note"),
            Notice(
                code="A191",
                text="further boiler: stopped at a gap of 1.41 %, asked 0.10 %.",
                severity="warning",
            ),
        ),
        versions=(("evenfire", "0.1.0"), ("highspy", "1.16.0"), ("pyomo", "6.10.1")),
    )


def without_vessels(appraisal: Appraisal) -> Appraisal:
    """The same appraisal when no alternative has a vessel."""
    kept = tuple(each for each in appraisal.alternatives if each.vessel is None)
    return dataclasses.replace(appraisal, alternatives=kept, best="further boiler")
