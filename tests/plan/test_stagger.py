"""Shifting batch starts: against cases with a known least peak, and against every choice there is."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.plan.outcome import Has, Stop
from evenfire.plan.stagger import (
    DayKind,
    ShiftableStart,
    StaggerAim,
    StaggerProblem,
    reached,
    staggered_starts,
)

STEPS = 24
DAY = frozenset({("day", 0)})


def _start(
    today: int,
    positions: tuple[int, ...],
    load: tuple[float, ...],
    group: str = "a",
    resource: str = "",
    shift: str = "day",
) -> ShiftableStart:
    """A batch on steps of an hour whose shift starts at midnight, held as long as it takes steam."""
    profile = np.zeros((len(positions), 2 * STEPS))
    for row, position in enumerate(positions):
        profile[row, position : position + len(load)] = load
    return ShiftableStart(
        group=group,
        today_h=float(today),
        positions_h=tuple(float(position) for position in positions),
        load_t_h={shift: profile},
        resource=resource,
        held={shift: (profile > 0.0).astype(float)},
    )


def _problem(
    *starts: ShiftableStart,
    other: float = 0.0,
    units: dict[str, int] | None = None,
    capacity: float = 0.0,
    days: tuple[DayKind, ...] = (),
) -> StaggerProblem:
    return StaggerProblem(
        step_h=1.0,
        starts=starts,
        days=days or (DayKind(running=DAY, other_t_h=np.full(STEPS, other)),),
        units=units or {},
        capacity_t_h=capacity,
    )


def _least(problem: StaggerProblem, aim: StaggerAim = StaggerAim.PEAK) -> float:
    outcome = staggered_starts(problem, aim, gap=0.0, time_limit_s=20.0)
    assert outcome.has is Has.PLAN
    assert outcome.stop is Stop.GAP_REACHED
    assert outcome.value is not None
    assert outcome.bound is not None
    assert outcome.bound <= outcome.value + 1e-9
    return outcome.value


def test_three_alike_batches_with_room_run_one_after_the_other() -> None:
    """Three hours of 2 t/h at once become one at a time: the peak falls from 7 to 3 t/h."""
    problem = _problem(*(_start(6, (6, 7, 8), (2.0,)) for _ in range(3)), other=1.0)

    assert reached(problem, StaggerAim.PEAK, (0, 0, 0)) == 7.0
    assert _least(problem) == pytest.approx(3.0)


def test_limits_bind() -> None:
    """With one hour of room for three batches two of them must meet."""
    assert _least(_problem(*(_start(6, (6, 7), (2.0,)) for _ in range(3)))) == pytest.approx(4.0)


def test_starts_are_moved_no_further_than_needed() -> None:
    """Two batches that can part by an hour do so, although six hours were allowed."""
    outcome = staggered_starts(
        _problem(*(_start(6, tuple(range(6, 13)), (2.0,)) for _ in range(2))),
        StaggerAim.PEAK,
        gap=0.0,
        time_limit_s=20.0,
    )
    assert sorted(outcome.starts_h) == [6.0, 7.0]


def test_a_batch_that_runs_past_midnight_meets_the_next_day() -> None:
    """A start at 23 h carries an hour into the next day, where a batch at 0 h must give way."""
    days = (DayKind(running=frozenset({("day", 0), ("day", 1)}), other_t_h=np.zeros(STEPS)),)
    late, early = _start(23, (23,), (1.0, 1.0), "late"), _start(0, (0, 1), (1.0,), "early")
    outcome = staggered_starts(_problem(late, early, days=days), StaggerAim.PEAK, gap=0.0, time_limit_s=20.0)
    assert outcome.starts_h == (23.0, 1.0)
    assert outcome.value == pytest.approx(1.0)


def test_a_shared_vessel_keeps_batches_apart_or_is_said_to_be_short() -> None:
    """Two-hour batches of one vessel need two hours between them; one hour of room is no choice."""
    light, heavy = (0.1, 0.1), {"vessel": 1}
    apart = _problem(*(_start(6, (6, 7, 8), light, resource="vessel") for _ in range(2)), units=heavy)
    short = _problem(*(_start(6, (6, 7), light, resource="vessel") for _ in range(2)), units=heavy)

    outcome = staggered_starts(apart, StaggerAim.PEAK, gap=0.0, time_limit_s=20.0)
    assert sorted(outcome.starts_h) == [6.0, 8.0]
    stopped = staggered_starts(short, StaggerAim.PEAK, gap=0.0, time_limit_s=20.0)
    assert (stopped.stop, stopped.has, stopped.starts_h) == (Stop.INFEASIBLE, Has.NOTHING, ())


def test_only_the_days_on_which_a_shift_runs_count() -> None:
    """A high other demand on a day without the shift neither moves the starts nor hides the peak there."""
    days = (
        DayKind(running=DAY, other_t_h=np.where(np.arange(STEPS) == 7, 3.0, 0.0)),
        DayKind(running=frozenset(), other_t_h=np.full(STEPS, 2.5)),
    )
    outcome = staggered_starts(
        _problem(_start(7, (6, 7), (2.0,)), days=days), StaggerAim.PEAK, gap=0.0, time_limit_s=20.0
    )
    assert outcome.starts_h == (6.0,)
    assert outcome.value == pytest.approx(3.0)


def test_storage_need_can_be_the_aim() -> None:
    """At 3 t/h two batches of 5 t/h leave 2 t each above capacity: apart, an idle hour refills the store."""
    starts = tuple(_start(6, (6, 7, 8), (5.0,)) for _ in range(2))
    problem = _problem(*starts, capacity=3.0)

    assert reached(problem, StaggerAim.STORAGE, (0, 0)) == 7.0
    assert reached(problem, StaggerAim.STORAGE, (0, 1)) == 4.0
    assert _least(problem, StaggerAim.STORAGE) == pytest.approx(2.0)


@st.composite
def problems(draw: st.DrawFn) -> StaggerProblem:
    starts = []
    for number in range(draw(st.integers(1, 4))):
        first = draw(st.integers(0, 20))
        positions = tuple(range(first, first + draw(st.integers(1, 4))))
        load = tuple(draw(st.lists(st.integers(1, 5).map(float), min_size=1, max_size=3)))
        starts.append(_start(draw(st.sampled_from(positions)), positions, load, str(number)))
    other = np.array(draw(st.lists(st.integers(0, 6).map(float), min_size=STEPS, max_size=STEPS)))
    running = frozenset({("day", 0), ("day", 1)}) if draw(st.booleans()) else DAY
    return _problem(
        *starts, days=(DayKind(running=running, other_t_h=other),), capacity=float(draw(st.integers(4, 9)))
    )


@settings(max_examples=25)
@given(problem=problems(), aim=st.sampled_from(StaggerAim))
def test_no_choice_of_starts_is_better(problem: StaggerProblem, aim: StaggerAim) -> None:
    """The least value equals that of the best of all combinations, tried one by one."""
    mean = problem.days[0].other_t_h.sum() + sum(
        float(start.load_t_h["day"][0].sum()) for start in problem.starts
    )
    if aim is StaggerAim.STORAGE and mean >= problem.capacity_t_h * STEPS:
        return
    choices = itertools.product(*(range(len(start.positions_h)) for start in problem.starts))
    best = min(reached(problem, aim, choice) for choice in choices)
    assert _least(problem, aim) == pytest.approx(best, abs=1e-5)
