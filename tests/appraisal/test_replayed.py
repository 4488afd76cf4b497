"""Plan and replay on the same day, and which plant is recommended."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.priced import priced
from evenfire.appraisal.replayed import plant_spec, replayed_flows
from evenfire.appraisal.results import Appraisal
from evenfire.appraisal.vessels import window_tables
from evenfire.plan.flows import yearly_flows
from evenfire.plan.inputs import PlanInputs, VesselUse
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Plan
from evenfire.replay.controls import ControlKind, GivenOutputs
from evenfire.replay.simulate import Replay
from evenfire.replay.starting_controls import usual_controls
from tests.model.plants import rules

DAYS = 56


@pytest.fixture(scope="module")
def stored(small_appraisal: Appraisal) -> tuple[PlanInputs, Plan]:
    """A plan of the small works with a vessel."""
    case = small_appraisal.case
    inputs = plan_inputs(
        case,
        small_appraisal.record,
        small_appraisal.typical_days,
        small_appraisal.storage_need,
        window_tables(case),
    )
    outcome = best_plan(
        inputs,
        rules(inputs, vessel=VesselUse.REQUIRED, required=("Old boiler",)),
        gap=0.02,
        time_limit_s=10.0,
    )
    assert outcome.plan is not None
    return inputs, outcome.plan


def test_with_the_plan_s_foresight_the_replay_burns_its_fuel(
    small_appraisal: Appraisal, stored: tuple[PlanInputs, Plan]
) -> None:
    """The planned workday for eight weeks, outputs given as planned: fuel within 0.3 %, little unmet."""
    inputs, plan = stored
    case = small_appraisal.case
    day = max(range(len(inputs.days)), key=lambda d: inputs.days[d].days_per_year)
    dispatch, demand = plan.dispatch[day], inputs.days[day].demand_t_h / 3.6
    cycling = np.array(
        [
            [
                k >= 0 and inputs.boiler(name).modes[k].name == "cycling" and made > 1e-9
                for k, made in zip(dispatch.mode[row], dispatch.output_t_h[row], strict=True)
            ]
            for row, name in enumerate(plan.boilers)
        ]
    )
    wanted = np.where(cycling, np.nan, dispatch.output_t_h / 3.6)
    plant = plant_spec(case, window_tables(case), inputs, plan)
    record = replace(
        small_appraisal.record, flow_kg_s=np.tile(demand, DAYS), step_s=inputs.step_h * 3600.0, gaps=()
    )
    start = usual_controls(plant, ControlKind.GIVEN)
    controls = replace(start, given=GivenOutputs(output_kg_s=np.tile(wanted, (1, DAYS))))
    result = Replay(plant, record).run(controls)
    one_day = replace(
        inputs,
        days=(replace(inputs.days[day], days_per_year=365.0),),
        transitions_per_year=np.zeros((1, 1)),
    )
    promised = yearly_flows(one_day, replace(plan, dispatch=(dispatch,)))
    ran = replayed_flows(result)

    assert ran.fuel_mwh == pytest.approx(promised.fuel_mwh, rel=3e-3)
    assert ran.unmet_t <= promised.unmet_t + 0.003 * promised.demand_t


def test_replay_and_plan_are_priced_by_the_same_function(
    small_appraisal: Appraisal, stored: tuple[PlanInputs, Plan]
) -> None:
    """The flows of the plan handed in as if replayed give the plan's own cost."""
    inputs, plan = stored
    case, tables = small_appraisal.case, window_tables(small_appraisal.case)

    assert (
        priced(case, inputs, tables, plan, yearly_flows(inputs, plan)).cash.present_cost
        == priced(case, inputs, tables, plan).cash.present_cost
    )


def test_the_recommended_plant_is_the_cheapest_that_works(small_appraisal: Appraisal) -> None:
    """Of the plants replayed none that passes costs less; savings are against the replayed reference."""
    reference = small_appraisal.alternative(small_appraisal.reference).replayed
    assert reference is not None
    for result in small_appraisal.alternatives:
        run = result.replayed
        assert run is not None
        assert run.net_present_cost == min(size.replayed_cost for size in run.sizes) or not all(
            size.unmet_steam_t_per_year <= result.unmet_steam_t_per_year + 5.0 for size in run.sizes
        )
        assert run.net_present_saving == pytest.approx(reference.net_present_cost - run.net_present_cost)
        assert run.mass_closure_relative < 1e-9
        assert sum(part.mwh_per_year for part in run.fuel_parts) == pytest.approx(
            run.fuel_mwh_per_year, rel=1e-9
        )
