"""The risk section of a case file: what is uncertain, and how much."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_section import Section, entry, quantity

UncertainName = Literal[
    "fuel price",
    "carbon price",
    "electricity price",
    "water price",
    "price of unmet steam",
    "maintenance",
    "cost of new boilers",
    "cost of vessels",
    "steam demand growth",
]
WALKING = ("fuel price", "carbon price", "electricity price", "water price")
"""What may change from year to year at random."""
LEADING: UncertainName = "fuel price"
"""What the others may be correlated with."""


class Uncertain(Section):
    """One uncertain quantity."""

    quantity: Annotated[
        UncertainName,
        entry(
            "What is uncertain: a price or cost of the case, or the growth of the steam demand, which lets"
            " the yearly fuel, carbon, electricity, water and unmet steam of every plan grow alike."
        ),
    ]
    distribution: Annotated[
        Literal["uniform", "triangular", "lognormal"],
        entry(
            "'uniform' between low and high; 'triangular' between low and high with its peak at likely;"
            " 'lognormal' with low and high exceeded in nine of ten and one of ten scenarios."
        ),
    ]
    low_percent: Annotated[
        float,
        quantity(
            "%", "Low deviation from what the case states; of growth, per year.", above=-100.0, at_most=1e3
        ),
    ]
    high_percent: Annotated[float, quantity("%", "High deviation likewise.", above=-100.0, at_most=1e3)]
    likely_percent: Annotated[
        float, quantity("%", "Likeliest deviation; for 'triangular' alone.", above=-100.0, at_most=1e3)
    ] = 0.0
    yearly_volatility_percent: Annotated[
        float,
        quantity(
            "%",
            "Random change of a price from year to year on top, as a geometric random walk without drift:"
            " standard deviation of the logarithm per year.",
            at_least=0.0,
            at_most=100.0,
        ),
    ] = 0.0
    correlation_with_fuel_price: Annotated[
        float,
        quantity(
            "1",
            "Correlation with the fuel price, of the normal scores of both.",
            at_least=-1.0,
            at_most=1.0,
        ),
    ] = 0.0


class Risk(Section):
    """Random scenarios of what is uncertain."""

    scenarios: Annotated[
        int, quantity("1", "How many scenarios are drawn.", at_least=100, at_most=1_000_000)
    ] = 10_000
    seed: Annotated[int, quantity("1", "Seed of the random numbers.", at_least=0, at_most=2**31 - 1)] = 1
    uncertain: Annotated[tuple[Uncertain, ...], entry("What is uncertain, one table each.", shortest=1)]
