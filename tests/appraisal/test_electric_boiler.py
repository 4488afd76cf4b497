"""An electric boiler is a boiler with another curve and price."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import iapws
import numpy as np
import pytest

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.priced import priced
from evenfire.case.load import load_case
from evenfire.demand.series import DemandRecord
from evenfire.demand.storage_need import storage_need
from evenfire.demand.typical_days import typical_days
from evenfire.plan.optimum import best_plan
from tests.small_case import SMALL_CASE, write_small_case


def test_steady_demand_costs_heat_over_efficiency(tmp_path: Path) -> None:
    """1.5 t/h all year at 99 % and 9 bar g: heat by an independent library, no purge, no CO2, no starts.

    Turned down to a hundredth it fires at any load; wear and purge have nothing to count.
    """
    folder = write_small_case(tmp_path / "electric", days=2)
    text = SMALL_CASE
    for old, new in (
        ('kind = "natural_gas"', 'kind = "electricity"'),
        ("carbon_price_per_t = 60.0", "carbon_price_per_t = 60.0\nco2_kg_per_gj_lhv = 0.0"),
        ("turndown_ratio = 4.0", "turndown_ratio = 100.0\nstanding_loss_kw = 4.0"),
        ("load_percent = 25, efficiency_percent = 88.0", "load_percent = 1, efficiency_percent = 99.0"),
        ("load_percent = 100, efficiency_percent = 90.0", "load_percent = 100, efficiency_percent = 99.0"),
    ):
        assert old in text
        text = text.replace(old, new, 1)
    (folder / "case.toml").write_text(text)
    case = load_case(folder)
    record = DemandRecord(
        start=dt.datetime(2026, 3, 2),
        step_s=900.0,
        flow_kg_s=np.full(14 * 96, 1.5 / 3.6),
        source="made",
        notices=(),
    )
    need = storage_need(record.flow_kg_s, record.step_s)
    inputs = plan_inputs(case, record, typical_days(record, 900.0), need, ())
    outcome = best_plan(inputs, RULES["as is"](inputs), gap=1e-6, time_limit_s=20.0)
    assert outcome.plan is not None
    flows = priced(case, inputs, (), outcome.plan).flows

    water = iapws.IAPWS97(P=1.001325, T=376.15).h
    boiling, steam = (iapws.IAPWS97(P=1.001325, x=x).h for x in (0.0, 1.0))
    heat_mwh_per_t = (steam - water + 0.04 * (boiling - water)) / 3600.0
    (boiler,) = flows.boilers
    assert boiler.fuel_mwh == pytest.approx(1.5 * 8760 * heat_mwh_per_t / 0.99, rel=1e-5)
    assert boiler.burner_starts == 0.0
    assert case.fuel.co2_kg_per_j_lhv == 0.0
    assert case.boilers[0].spec.purge_energy_j == 0.0
    assert case.boilers[0].spec.stack_slope_per_k == 0.0
