"""The fuel of a plan by purpose: parts that add up, each against what it must be."""

from __future__ import annotations

import iapws
import pytest

from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.priced import blowdown_share, priced
from evenfire.appraisal.results import Appraisal
from evenfire.appraisal.vessels import window_tables
from evenfire.plan.flows import yearly_flows
from evenfire.plan.fuel_parts import fuel_parts
from evenfire.plan.inputs import VesselUse
from evenfire.plan.optimum import best_plan
from evenfire.report.document import document
from tests.model.plants import boiler, rules, segment, site


def test_parts_add_up_to_the_fuel(small_appraisal: Appraisal) -> None:
    """For every alternative the parts sum to its fuel, in the result and in the JSON, to 1e-6."""
    for result, written in zip(
        small_appraisal.alternatives, document(small_appraisal)["alternatives"], strict=True
    ):
        parts = {part.name: part.mwh_per_year for part in result.fuel_parts}
        assert sum(parts.values()) == pytest.approx(result.fuel_mwh_per_year, rel=1e-6)
        for figures in (written, written["planned"]):
            assert sum(figures["fuel_parts_mwh_per_year"].values()) == pytest.approx(
                figures["fuel_mwh_per_year"], rel=1e-6
            )
        assert (parts["standing loss of the vessel"] > 0.0) is (result.vessel is not None)
        assert (parts["vessel gives more than it takes"] < 0.0) is (result.vessel is not None)
        assert min(parts["steam used"], parts["blowdown"], parts["standing loss"]) > 0.0


def test_parts_times_their_price_are_the_objective(small_appraisal: Appraisal) -> None:
    """Fuel parts and every other part of the plan's objective sum to its total to 1e-6."""
    case = small_appraisal.case
    tables = window_tables(case)
    inputs = plan_inputs(
        case, small_appraisal.record, small_appraisal.typical_days, small_appraisal.storage_need, tables
    )
    asked = rules(inputs, vessel=VesselUse.REQUIRED, required=("Old boiler",))
    outcome = best_plan(inputs, asked, gap=0.02, time_limit_s=10.0)
    assert outcome.plan is not None
    price = priced(case, inputs, tables, outcome.plan)
    lines = {name: price.cash.line_present_cost(name) for name in price.cash.lines}
    fuel_k = inputs.rates.fuel_k_mwh * fuel_parts(price.flows, blowdown_share(case)).total

    assert lines["fuel"] + lines["carbon"] == pytest.approx(1000.0 * fuel_k, rel=1e-6)
    rest = sum(amount for name, amount in lines.items() if name not in ("fuel", "carbon"))
    assert 1000.0 * fuel_k + rest == pytest.approx(1000.0 * (outcome.cost_k or 0.0), rel=1e-6)


def test_vessel_and_pressure_parts_by_hand() -> None:
    """A steady boiler charges against a loss of 0.01 t/h, at a pressure that costs 0.4 % of all fuel.

    300 days of 0.5 h at a mean of 2 t/h: 300 t of demand and 1.5 t of loss.
    """
    vessel = segment(10.0, 10.0, pressure=1, loss_per_m3=0.001, credit=0.004)
    inputs = site([[0.0, 4.0]], [boiler("a", 2.1, curvature=0.0)], segments=(vessel,))
    outcome = best_plan(inputs, rules(inputs, vessel=VesselUse.REQUIRED), gap=1e-6, time_limit_s=20.0)
    assert outcome.plan is not None
    flows = yearly_flows(inputs, outcome.plan)
    parts = fuel_parts(flows, blowdown_share=0.02)
    making = flows.boilers[0].firing_fuel_mwh

    assert flows.vessel_loss_t == pytest.approx(1.5)
    assert making == pytest.approx(0.03 * 150 + 0.75 * 301.5)
    assert parts.blowdown == pytest.approx(0.02 * making)
    assert parts.vessel_loss == pytest.approx(0.98 * making * 1.5 / 301.5)
    assert parts.vessel_credit == pytest.approx(-0.004 * flows.charged_t)
    assert parts.boiler_pressure == pytest.approx(0.004 * making)
    assert parts.total == pytest.approx(flows.fuel_mwh, rel=1e-12)


def test_blowdown_share_from_an_independent_library(small_appraisal: Appraisal) -> None:
    """At 9 bar g and 103 degC feedwater 4 % blowdown carries 4 % of (h' - h_f) over all heat added."""
    site_mpa = 1.001325
    water = iapws.IAPWS97(P=site_mpa, T=376.15).h
    boiling, steam = (iapws.IAPWS97(P=site_mpa, x=x).h for x in (0.0, 1.0))
    blown = 0.04 * (boiling - water)

    assert blowdown_share(small_appraisal.case) == pytest.approx(blown / (steam - water + blown), rel=1e-5)
