"""Table of what each alternative's boilers and vessel mean for the peaks of the whole record."""

from __future__ import annotations

import datetime as dt

import numpy as np

from evenfire.appraisal.results import Appraisal
from evenfire.appraisal.staggering import NAME
from evenfire.report.figures_demand import firm_capacity_t_h, steam_capacity_t
from evenfire.report.formats import MISSING, digits, number, plain, short
from evenfire.report.page_table import Table, plain_table
from evenfire.units import KG_PER_TONNE, kg_s_to_t_h

SECONDS_PER_MINUTE = 60.0


def storage_need_table(appraisal: Appraisal) -> Table:
    """Storage that the record needs at each alternative's boiler rating, and the stretch that decides it.

    Staggered starts change the record itself and are left out.
    """
    return plain_table(
        "What the record asks of each alternative.",
        (
            "Alternative",
            "Boilers [t/h]",
            "Storage needed [t]",
            "Storage there [t]",
            "Not covered [t]",
            "Stretch that decides it",
        ),
        tuple(
            (
                each.name,
                plain(firm_capacity_t_h(each), 4),
                *_need(appraisal, firm_capacity_t_h(each)),
                digits(steam_capacity_t(each)),
                number(each.record_shortfall_t, 1),
                _deciding_stretch(appraisal, firm_capacity_t_h(each)),
            )
            for each in appraisal.alternatives
            if each.planned and each.name != NAME
        ),
        word_columns=(5,),
    )


def _need(appraisal: Appraisal, capacity_t_h: float) -> tuple[str]:
    """S at a capacity, read off between its breakpoints, where it is a straight line."""
    need = appraisal.storage_need
    breakpoints = need.capacity_kg_s * kg_s_to_t_h(1.0)
    if capacity_t_h < breakpoints[0]:
        return (MISSING,)
    return (digits(float(np.interp(capacity_t_h, breakpoints, need.storage_kg)) / KG_PER_TONNE),)


def _deciding_stretch(appraisal: Appraisal, capacity_t_h: float) -> str:
    need, record = appraisal.storage_need, appraisal.record
    breakpoints = need.capacity_kg_s * kg_s_to_t_h(1.0)
    if capacity_t_h < breakpoints[0]:
        return "boilers below mean demand"
    if capacity_t_h >= breakpoints[-1]:
        return "none: boilers reach the peak"
    piece = need.pieces[int(np.searchsorted(breakpoints, capacity_t_h, side="right")) - 1]
    begins = record.start + dt.timedelta(seconds=piece.first_step * record.step_s)
    return f"{short(piece.duration_s / SECONDS_PER_MINUTE)} min from {begins:%Y-%m-%d %H:%M}"
