"""Tables of one alternative's equipment: boilers and vessel."""

from __future__ import annotations

from evenfire.appraisal.results import AlternativeResult, VesselChoice
from evenfire.report.formats import digits, number
from evenfire.report.page_table import Table, plain_table
from evenfire.report.trade_units import gauge


def boilers_table(result: AlternativeResult) -> Table:
    """Boilers of a plan and what each does in a year."""
    return plain_table(
        f"Boilers, working at {gauge(result.boiler_working_bar_abs)} bar g "
        f"({number(result.boiler_working_bar_abs, 1)} bar abs).",
        ("Boiler", "Rating [kg/h]", "", "Steam [t/a]", "Firing [h/a]", "Burner starts [1/a]"),
        tuple(
            (
                boiler.name,
                number(boiler.rating_kg_h),
                "in place" if boiler.existing else "new",
                number(boiler.steam_t_per_year),
                number(boiler.firing_hours_per_year),
                number(boiler.burner_starts_per_year),
            )
            for boiler in result.boilers
        ),
        word_columns=(2,),
    )


def vessel_table(vessel: VesselChoice) -> Table:
    """Facts of a chosen accumulator."""
    return plain_table(
        "Accumulator, for an investment decision only.",
        ("", "", ""),
        (
            ("Volume", digits(vessel.volume_m3), "m³"),
            ("Charged pressure", gauge(vessel.charged_bar_abs), _bar_words(vessel.charged_bar_abs)),
            (
                "Discharged pressure",
                gauge(vessel.discharged_bar_abs),
                _bar_words(vessel.discharged_bar_abs),
            ),
            ("Steam capacity, charged to discharged", number(vessel.steam_capacity_kg), "kg"),
            ("Largest rate of release", number(vessel.release_limit_kg_h), "kg/h"),
            ("Standing loss", digits(vessel.standing_loss_kw), "kW"),
            ("Diameter", digits(vessel.diameter_m), "m"),
            ("Length of the cylinder", digits(vessel.cylinder_length_m), "m"),
            ("Wall thickness, estimate for cost only", digits(vessel.wall_thickness_mm), "mm"),
            ("Shell mass, estimate for cost only", digits(vessel.shell_mass_t), "t"),
        ),
        word_columns=(2,),
    )


def _bar_words(pressure_bar_abs: float) -> str:
    return f"bar g ({number(pressure_bar_abs, 1)} bar abs)"
