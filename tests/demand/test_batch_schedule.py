"""Demand from equipment: steam balance, start rules, queues, calendar, sampled weeks."""

import datetime as dt
import math

import numpy as np
import pytest

from evenfire.demand.batch_sample import (
    quantile_week,
    record_with_schedule,
    sampled_weeks,
    schedule_record,
    week_statistics,
)
from evenfire.demand.batch_schedule import (
    Batch,
    BatchSchedule,
    Phase,
    Resource,
    Shift,
    check_schedule,
    heating_phase,
    heating_steam_kg,
)
from evenfire.demand.series import DemandRecord
from evenfire.demand.storage_need import storage_need_kg
from evenfire.errors import OutOfRangeError, RecordError

MONDAY = dt.date(2026, 2, 2)
EARLY = Shift(name="early", weekdays=(0, 1, 2, 3, 4), start_s=6 * 3600.0, duration_s=8 * 3600.0)
HEAT = Phase(name="heat up", duration_s=600.0, flow_kg_s=0.8)
HOLD = Phase(name="hold", duration_s=2400.0, flow_kg_s=0.1)
STEAM_KG = 600.0 * 0.8 + 2400.0 * 0.1


def batch(**changes):
    """A batch with two fixed starts in the early shift."""
    stated = {"name": "cook", "phases": (HEAT, HOLD), "shifts": ("early",), "starts_s": (0.0, 3600.0)}
    return Batch(**(stated | changes))


def schedule(*batches, **changes):
    """A schedule with the early shift."""
    stated = {"name": "kitchen", "shifts": (EARLY,), "batches": batches or (batch(),)}
    return BatchSchedule(**(stated | changes))


def random_batch(count=6, **changes):
    """Batches at random times of the first six hours."""
    return batch(starts_s=(), batches_per_shift=count, window_s=(0.0, 6 * 3600.0), **changes)


def test_fixed_starts_give_the_flow_that_one_would_draw_by_hand():
    """Heat up from 06:00, hold, and again from 07:00."""
    record = schedule_record(schedule(base_kg_s=0.05), MONDAY, 1, 600.0, 1)
    by_hand = np.full(144, 0.05)
    for start in (36, 42):
        by_hand[start] += 0.8
        by_hand[start + 1 : start + 5] += 0.1
    np.testing.assert_allclose(record.flow_kg_s, by_hand, atol=1e-12)


def test_steam_is_conserved_whatever_the_step():
    """Starts between the steps are averaged, not rounded: a week holds all its batches."""
    for step_s in (60.0, 900.0, 3600.0):
        record = schedule_record(schedule(random_batch()), MONDAY, 7, step_s, 3)
        assert record.flow_kg_s.sum() * step_s == pytest.approx(5 * 6 * STEAM_KG, rel=1e-9)


def test_same_seed_same_record_and_other_seed_another():
    """Seeded."""
    one = schedule_record(schedule(random_batch()), MONDAY, 7, 300.0, 3).flow_kg_s
    again = schedule_record(schedule(random_batch()), MONDAY, 7, 300.0, 3).flow_kg_s
    other = schedule_record(schedule(random_batch()), MONDAY, 7, 300.0, 4).flow_kg_s
    np.testing.assert_array_equal(one, again)
    assert not np.array_equal(one, other)


def test_a_day_does_not_depend_on_how_many_are_asked_for():
    """The first week of two is the week drawn alone."""
    plan = schedule(random_batch())
    week = schedule_record(plan, MONDAY, 7, 300.0, 3).flow_kg_s
    two = schedule_record(plan, MONDAY, 14, 300.0, 3).flow_kg_s
    np.testing.assert_allclose(two[: week.size], week, atol=1e-9)


def test_queue_runs_one_batch_after_the_other():
    """Three batches ready at once on one vessel: heat-ups every 50 + 10 minutes, never two together."""
    waiting = batch(
        starts_s=(), batches_per_shift=3, window_s=(0.0, 0.0), resource="vessel", turnaround_s=600.0
    )
    plan = schedule(waiting, resources=(Resource(name="vessel", units=1),))
    flow = schedule_record(plan, MONDAY, 1, 600.0, 1).flow_kg_s
    assert np.flatnonzero(flow > 0.5).tolist() == [36, 42, 48]


def test_units_limit_what_runs_together():
    """Six batches at once on two vessels never take more steam than two."""
    waiting = batch(starts_s=(), batches_per_shift=6, window_s=(0.0, 0.0), resource="vessel")
    for units in (1, 2, 3):
        plan = schedule(waiting, resources=(Resource(name="vessel", units=units),))
        assert schedule_record(plan, MONDAY, 1, 600.0, 1).flow_kg_s.max() == pytest.approx(0.8 * units)


def test_resource_shared_for_the_first_phase_alone():
    """A loading crane held for the heat-up separates heat-ups but lets holds overlap."""
    waiting = batch(starts_s=(), batches_per_shift=4, window_s=(0.0, 0.0), resource="crane", held_phases=1)
    plan = schedule(waiting, resources=(Resource(name="crane", units=1),))
    flow = schedule_record(plan, MONDAY, 1, 600.0, 1).flow_kg_s
    np.testing.assert_allclose(flow[36:40], [0.8, 0.9, 1.0, 1.1], atol=1e-9)


def test_batches_that_do_not_fit_are_counted_not_made():
    """Eight hours hold ten batches of 50 minutes on one vessel."""
    waiting = batch(starts_s=(), batches_per_shift=12, window_s=(0.0, 0.0), resource="vessel")
    plan = schedule(waiting, resources=(Resource(name="vessel", units=1),))
    record = schedule_record(plan, MONDAY, 1, 600.0, 1)
    assert record.flow_kg_s.sum() * 600.0 == pytest.approx(10 * STEAM_KG)
    assert "2 batches did not fit" in record.notices[0].text


def test_night_shift_reaches_into_the_next_day_and_from_the_day_before():
    """The first morning holds the shift that began on Sunday."""
    days = tuple(range(7))
    night = Shift(name="night", weekdays=days, start_s=79_200.0, duration_s=28_800.0, flow_kg_s=0.5)
    plan = BatchSchedule(name="night", shifts=(night,), batches=())
    flow = schedule_record(plan, MONDAY, 1, 3600.0, 1).flow_kg_s
    np.testing.assert_allclose(flow, [0.5] * 6 + [0.0] * 16 + [0.5] * 2)


def test_closed_dates_are_closed():
    """A holiday on Tuesday has no batch."""
    plan = schedule(closed_dates=(dt.date(2026, 2, 3),))
    daily = schedule_record(plan, MONDAY, 7, 3600.0, 1).flow_kg_s.reshape(7, 24).sum(axis=1)
    assert (daily > 0.0).tolist() == [True, False, True, True, True, False, False]


def test_durations_vary_within_their_spread():
    """Steam of single batches stays within a spread of 20 % and is not constant."""
    heat = Phase(name="heat up", duration_s=600.0, flow_kg_s=0.8, duration_spread=0.2)
    plan = schedule(batch(phases=(heat,), starts_s=(0.0,)))
    record = schedule_record(plan, MONDAY, 70, 86_400.0, 1)
    steam = record.flow_kg_s[record.flow_kg_s > 0.0] * 86_400.0 / (600.0 * 0.8)
    assert steam.min() >= 0.8
    assert steam.max() <= 1.2
    assert np.ptp(steam) > 0.3


def test_new_equipment_stands_on_top_of_a_measured_record():
    """The record's own steam stays and that of the schedule is added from the right hour."""
    measured = DemandRecord(
        start=dt.datetime(2026, 2, 2, 5, 30), step_s=1800.0, flow_kg_s=np.full(60, 1.0), source="steam.csv"
    )
    both = record_with_schedule(measured, schedule(), 1)
    np.testing.assert_allclose(both.flow_kg_s[:6] - 1.0, [0.0, 1 / 3, 2 / 30, 1 / 3, 2 / 30, 0.0], atol=1e-9)
    assert both.source == "steam.csv with batch schedule 'kitchen'"
    assert [notice.code for notice in both.notices] == ["R151"]


def test_chance_of_coinciding_is_that_of_two_random_points():
    """Two heat-ups of 600 s in a window of 6000 s coincide with the chance 1 - (1 - 600/6000)^2.

    A step of 60 s shows them together from an overlap of up to 60 s on; four standard errors are added.
    """
    heat = (Phase(name="heat up", duration_s=600.0, flow_kg_s=1.0),)
    pair = batch(phases=heat, starts_s=(), batches_per_shift=2, window_s=(0.0, 6000.0))
    weeks = 800
    sample = sampled_weeks(schedule(pair), MONDAY, weeks, 60.0, 5)
    days = sample.flow_kg_s.reshape(weeks * 7, -1)[np.arange(weeks * 7) % 7 < 5]
    together = float((days.max(axis=1) > 1.0 + 1e-9).mean())
    least, most = (1.0 - (1.0 - overlap / 6000.0) ** 2 for overlap in (540.0, 600.0))
    noise = 4.0 * math.sqrt(most / len(days))
    assert least - noise <= together <= most + noise


def test_quantile_week_needs_more_storage_than_its_share_of_weeks():
    """Of 40 weeks, 38 need no more than the P95 week; statistics and week agree."""
    sample = sampled_weeks(schedule(random_batch(10)), MONDAY, 40, 300.0, 5)
    week = quantile_week(sample, 0.9, 0.95)
    needs = [storage_need_kg(flow * 3600.0, 300.0, 3240.0) for flow in sample.flow_kg_s]
    need = storage_need_kg(week.flow_kg_s * 3600.0, 300.0, 3240.0)
    assert sum(other <= need + 1e-9 for other in needs) == 38
    found = week_statistics(sample, 0.9)
    assert found.storage_kg[1] == pytest.approx(need)
    assert found.storage_kg == tuple(sorted(found.storage_kg))
    assert week.days == 7.0


def test_batch_heat_follows_from_mass_and_temperature_rise():
    """1000 kg of water by 50 K with 2000 kJ/kg: 1000 x 4.18 x 50 / 2000 = 104.5 kg; a tenth lost, 116.1."""
    assert heating_steam_kg(1000.0, 4180.0, 50.0, 2.0e6, 0.0) == pytest.approx(104.5, abs=0.05)
    assert heating_steam_kg(1000.0, 4180.0, 50.0, 2.0e6, 0.1) == pytest.approx(116.1, abs=0.05)
    assert heating_phase("heat up", 600.0, 104.5).flow_kg_s * 600.0 == pytest.approx(104.5)
    with pytest.raises(OutOfRangeError, match=r"latent heat: found 2000 J/kg.*\n.*share of heat lost"):
        heating_steam_kg(1000.0, 4180.0, 50.0, 2000.0, 1.0)
    with pytest.raises(RecordError, match="must be positive"):
        heating_phase("heat up", 0.0, 1.0)


def test_all_problems_of_a_schedule_come_at_once():
    """Unknown names, starts beyond the shift, missing rules and negative numbers."""
    wrong = batch(
        phases=(Phase(name="heat", duration_s=0.0, flow_kg_s=-1.0, duration_spread=1.0),),
        shifts=("early", "late"),
        starts_s=(9 * 3600.0,),
        resource="crane",
    )
    bad_shift = Shift(name="bad", weekdays=(7,), start_s=-1.0, duration_s=0.0, flow_kg_s=-1.0)
    plan = BatchSchedule(
        name="wrong",
        shifts=(EARLY, bad_shift),
        batches=(wrong, batch(starts_s=())),
        resources=(Resource(name="vessel", units=0),),
        base_kg_s=-1.0,
    )
    with pytest.raises(RecordError, match="R150") as refused:
        check_schedule(plan)
    text = "\n".join(str(problem) for problem in refused.value.problems)
    for part in (
        "base flow: found -1",
        "batch 'cook': stands there twice",
        "no shift 'late'",
        "within the 28800 s",
        "no resource 'crane'",
        "phase 'heat': found 0 s",
        "a spread of 1",
        "0 fixed starts and 0 random",
        "weekdays (7,)",
        "needs at least one",
    ):
        assert part in text


@pytest.mark.parametrize(
    ("wrong", "text"),
    [
        (lambda: schedule_record(schedule(), MONDAY, 0, 60.0, 1), "0 days in steps of 60 s"),
        (lambda: schedule_record(schedule(), MONDAY, 1, 7.0, 1), "in steps of 7 s"),
        (lambda: sampled_weeks(schedule(), dt.date(2026, 2, 3), 1, 60.0, 1), "must be a Monday"),
        (lambda: quantile_week(sampled_weeks(schedule(), MONDAY, 1, 60.0, 1), 1.0, 0.0), "quantile 0"),
    ],
)
def test_requests_that_cannot_be_met_are_refused(wrong, text):
    """Days, steps, first day and quantile."""
    with pytest.raises(RecordError, match=text):
        wrong()
