"""Figures of the record: what was measured, for how long, and what storage it would take."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes

from evenfire.appraisal.results import AlternativeResult, Appraisal
from evenfire.appraisal.staggering import NAME
from evenfire.demand.series import DemandRecord, FloatArray
from evenfire.demand.statistics import load_duration_curve
from evenfire.report.figures_paper import BLUE, INK, MARKERS, SKY, VERMILION, Drawing, drawing, label
from evenfire.report.formats import number, short
from evenfire.units import KG_PER_TONNE, SECONDS_PER_HOUR, kg_s_to_t_h

BUCKETS = 700
CURVE_POINTS = 300
TODAY = "boilers in place today"


def record_drawing(appraisal: Appraisal) -> Drawing:
    """The whole record against the boilers in place."""
    return course_drawing(
        appraisal.record, today_capacity_t_h(appraisal), TODAY, "the boilers in place today can make"
    )


def duration_drawing(appraisal: Appraisal) -> Drawing:
    """Load duration curve of the raw record against the boilers in place."""
    return curve_drawing(appraisal.record, today_capacity_t_h(appraisal), TODAY)


def course_drawing(record: DemandRecord, line_t_h: float, line_words: str, line_sentence: str) -> Drawing:
    """The whole record: lowest, mean and highest step of each short stretch, so no peak is lost."""
    lowest, mean, highest, hours = bucketed_t_h(record, BUCKETS)
    times = np.datetime64(record.start, "s") + (hours * SECONDS_PER_HOUR).astype("timedelta64[s]")

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        axes.fill_between(
            times, lowest, highest, step="mid", color=SKY, linewidth=0, label="lowest to highest step"
        )
        axes.plot(times, mean, color=BLUE, linewidth=0.9, label="mean of the stretch")
        axes.axhline(line_t_h, color=VERMILION, linewidth=1.2, linestyle="--", label=line_words)
        axes.set_ylim(bottom=0.0)
        axes.set_xlim(times[0], times[-1])
        axes.set_ylabel("steam demand [t/h]")
        axes.set_xlabel("date")
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)

    return drawing(
        "record",
        "Steam demand as recorded",
        f"Demand over {number(record.days)} days lies between {short(float(lowest.min()))} and "
        f"{short(float(highest.max()))} t/h; {line_sentence} {short(line_t_h)} t/h.",
        (2.7,),
        draw,
    )


def curve_drawing(record: DemandRecord, line_t_h: float, line_words: str) -> Drawing:
    """Load duration curve of the raw record."""
    curve = load_duration_curve(record, CURVE_POINTS)
    flow_t_h = curve.flow_kg_s * kg_s_to_t_h(1.0)
    mean = kg_s_to_t_h(float(record.flow_kg_s.mean()))

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        axes.fill_between(100.0 * curve.share, flow_t_h, color=SKY, alpha=0.35, linewidth=0)
        axes.plot(
            100.0 * curve.share, flow_t_h, color=BLUE, linewidth=1.4, label="demand reached or exceeded"
        )
        axes.axhline(line_t_h, color=VERMILION, linewidth=1.2, linestyle="--", label=line_words)
        axes.axhline(mean, color=INK, linewidth=1.0, linestyle=":", label="mean demand")
        axes.set_xlim(0.0, 100.0)
        axes.set_ylim(bottom=0.0)
        axes.set_xlabel("share of the record [%]")
        axes.set_ylabel("steam demand [t/h]")
        axes.legend(loc="upper right")

    return drawing(
        "duration",
        "Load duration curve",
        f"Demand falls from a peak of {short(float(flow_t_h[0]))} t/h to {short(float(flow_t_h[-1]))} t/h; "
        f"its mean is {short(mean)} t/h.",
        (2.7,),
        draw,
        width_inches=4.4,
    )


def storage_need_drawing(appraisal: Appraisal) -> Drawing:
    """S(C) of the raw record with each alternative's boilers and vessel as a point."""
    need = appraisal.storage_need
    capacity = need.capacity_kg_s * kg_s_to_t_h(1.0)
    storage = need.storage_kg / KG_PER_TONNE
    planned = [each for each in appraisal.alternatives if each.planned and each.name != NAME]
    points = [(each.name, firm_capacity_t_h(each), steam_capacity_t(each)) for each in planned]
    smallest = min((x for _, x, _ in points), default=float(capacity[0]))
    left = min(0.97 * smallest, max(float(capacity[0]), 0.8 * smallest))
    right = 1.04 * max([float(capacity[-1]), *(x for _, x, _ in points)])
    needs = [float(np.interp(x, capacity, storage)) for _, x, _ in points]
    top = 1.5 * max([*needs, *(y for _, _, y in points)], default=0.0) or float(storage[0]) or 1.0

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        line_x, line_y = np.append(capacity, right), np.append(storage, 0.0)
        axes.fill_between(
            line_x, line_y, color=VERMILION, alpha=0.15, linewidth=0, label="here some peak is not met"
        )
        axes.plot(line_x, line_y, color=INK, linewidth=1.4, label="storage the record needs")
        for at, (name, x, y) in enumerate(points):
            colour, marker = MARKERS[at % len(MARKERS)]
            axes.plot(
                x,
                y,
                marker,
                color=colour,
                markersize=8,
                markeredgecolor="white",
                markeredgewidth=0.9,
                clip_on=False,
                zorder=5 + at,
                linestyle="none",
                label=label(name),
            )
        axes.set_xlim(left, right)
        axes.set_ylim(0.0, top)
        axes.set_xlabel("rating of all boilers of the alternative [t/h]")
        axes.set_ylabel("steam from storage [t]")
        axes.legend(loc="upper right")

    named = "; ".join(f"{name}: {short(x)} t/h and {short(y)} t" for name, x, y in points)
    return drawing(
        "storage-need",
        "Boiler capacity against the storage that the record needs",
        f"Storage needed falls with boiler capacity and is nothing from {short(float(capacity[-1]))} t/h "
        f"on. Alternatives: {named}.",
        (3.2,),
        draw,
    )


def bucketed_t_h(record: DemandRecord, buckets: int) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """Lowest, mean and highest demand [t/h] of equal stretches, and hours from the start to their middle.

    Every step belongs to one stretch, so the highest of the highest is the peak of the record.
    """
    flow = record.flow_kg_s * kg_s_to_t_h(1.0)
    edges = np.unique(np.linspace(0, flow.size, min(buckets, flow.size) + 1).astype(np.int64))
    starts, lengths = edges[:-1], np.diff(edges)
    middle = (starts + lengths / 2.0) * record.step_s / SECONDS_PER_HOUR
    return (
        np.minimum.reduceat(flow, starts),
        np.add.reduceat(flow, starts) / lengths,
        np.maximum.reduceat(flow, starts),
        middle,
    )


def today_capacity_t_h(appraisal: Appraisal) -> float:
    """Rating of all existing boilers [t/h]."""
    return kg_s_to_t_h(sum(offer.spec.rated_kg_s for offer in appraisal.case.boilers if offer.existing))


def firm_capacity_t_h(alternative: AlternativeResult) -> float:
    """Rating of all boilers of an alternative [t/h]."""
    return sum(boiler.rating_kg_h for boiler in alternative.boilers) / KG_PER_TONNE


def steam_capacity_t(alternative: AlternativeResult) -> float:
    """Steam capacity of an alternative's vessel [t]; 0 without one."""
    return alternative.vessel.steam_capacity_kg / KG_PER_TONNE if alternative.vessel is not None else 0.0
