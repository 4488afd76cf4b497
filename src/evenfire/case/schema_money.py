"""The money and plan sections of a case file."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_section import LARGEST_PRICE_PER_MWH, Section, entry, quantity

AlternativeName = Literal[
    "as is", "staggered starts", "bigger boiler", "further boiler", "storage", "free choice"
]


class Money(Section):
    """How amounts of different years are put on one basis, and the prices that are not fuel."""

    currency: Annotated[
        str,
        entry(
            "Currency of every amount in the case.",
            pattern="^[A-Z]{3}$",
            form="three capital letters such as EUR",
        ),
    ]
    price_date: Annotated[
        str,
        entry(
            "Date of every price in the case.",
            pattern=r"^\d{4}-\d{2}(-\d{2})?$",
            form="in quotes, 2026-10 or 2026-10-31",
        ),
    ]
    horizon_years: Annotated[
        int, quantity("a", "Years over which costs are counted.", at_least=1, at_most=60)
    ]
    discount_rate_percent: Annotated[
        float, quantity("%/a", "Discount rate, on rate_basis.", above=-100.0, at_most=100.0)
    ]
    rate_basis: Annotated[
        Literal["real", "nominal"],
        entry(
            "'nominal' rates and escalations contain inflation, 'real' ones do not; all on the same basis."
        ),
    ]
    contingency_percent: Annotated[
        float, quantity("%", "Added to every investment.", at_least=0.0, at_most=200.0)
    ] = 0.0
    maintenance_escalation_percent_per_year: Annotated[
        float,
        quantity("%/a", "Yearly change of maintenance and burner start costs.", above=-100.0, at_most=100.0),
    ] = 0.0
    electricity_price_per_mwh: Annotated[
        float,
        quantity(
            "currency/MWh",
            "Price of electricity for fans and pumps at the price date; may be below zero.",
            at_least=-LARGEST_PRICE_PER_MWH,
            at_most=LARGEST_PRICE_PER_MWH,
        ),
    ]
    electricity_escalation_percent_per_year: Annotated[
        float, quantity("%/a", "Yearly change of the electricity price.", above=-100.0, at_most=100.0)
    ] = 0.0
    fan_and_pump_kwh_per_t_steam: Annotated[
        float,
        quantity(
            "kWh/t",
            "Electricity of burner fan and feed pump per tonne of steam.",
            at_least=0.0,
            at_most=100.0,
        ),
    ] = 3.0
    water_price_per_m3: Annotated[
        float,
        quantity("currency/m3", "Treated make-up water and its discharge.", at_least=0.0, at_most=1.0e4),
    ]
    water_escalation_percent_per_year: Annotated[
        float, quantity("%/a", "Yearly change of the water price.", above=-100.0, at_most=100.0)
    ] = 0.0
    unmet_steam_price_per_t: Annotated[
        float,
        quantity(
            "currency/t",
            "What a tonne of steam the process did not get costs the site.",
            at_least=0.0,
            at_most=1.0e6,
        ),
    ]
    unmet_steam_escalation_percent_per_year: Annotated[
        float, quantity("%/a", "Yearly change of that price.", above=-100.0, at_most=100.0)
    ] = 0.0


class Plan(Section):
    """How the alternatives are planned."""

    step_minutes: Annotated[
        float,
        quantity(
            "min",
            "Step of the planned dispatch; a whole number of steps makes a day.",
            at_least=1.0,
            at_most=60.0,
        ),
    ] = 5.0
    gap_percent: Annotated[
        float,
        quantity(
            "%", "Gap between cost and proven bound at which planning stops.", at_least=0.0, at_most=20.0
        ),
    ] = 0.1
    time_limit_seconds: Annotated[
        float,
        quantity(
            "s", "Longest planning time per alternative; its result is labelled.", above=0.0, at_most=86_400.0
        ),
    ] = 30.0
    typical_days_error_percent: Annotated[
        float,
        quantity(
            "%",
            "Largest difference in operating cost between the typical days and all days of the record, for"
            " today's plant and for one with storage; days are added until it is met, up to twelve.",
            at_least=0.0,
            at_most=20.0,
        ),
    ] = 0.5
    reference: Annotated[
        AlternativeName, entry("The alternative that savings and payback are measured against.")
    ] = "as is"
    alternatives: Annotated[
        tuple[AlternativeName, ...] | None,
        entry(
            "Which ways to supply the demand are compared: 'as is'; 'staggered starts' (today's boilers,"
            " batches started within their limits so that peaks are least); 'bigger boiler' (new one in place"
            " of the old); 'further boiler' (new one beside them); 'storage' (accumulator with today's"
            " boilers); 'free choice' (any mix). The boilers need [new_boiler], storage needs [vessel], free"
            " choice one of the two, staggered starts a [schedule] whose starts may shift.",
            shortest=1,
            when_left_out="every one that the case's sections allow",
        ),
    ] = None
    unmet_steam_tolerance_t_per_year: Annotated[
        float,
        quantity("t/a", "Unmet steam per year that is put up with.", at_least=0.0, at_most=1.0e6),
    ] = 0.0


class Replay(Section):
    """How plans are tried on the whole record by controls that cannot see the future."""

    trials: Annotated[
        int,
        quantity(
            "1",
            "Runs over half of the record to tune the settings of one plant's controls.",
            at_least=24,
            at_most=10_000,
        ),
    ] = 96
    seed: Annotated[
        int, quantity("1", "Seed of the tuning's random numbers.", at_least=0, at_most=2**31 - 1)
    ] = 1
