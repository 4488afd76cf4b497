"""The site, steam, fuel and vessel sections of a case file."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_boiler import CalorificBasis
from evenfire.case.schema_section import LARGEST_PRICE_PER_MWH, Section, entry, quantity

FuelKind = Literal["natural_gas", "gas_oil", "heavy_fuel_oil", "lpg", "wood", "electricity"]


class Site(Section):
    """Which site, and the question asked."""

    name: Annotated[
        str, entry("Name of the site, as it stands in the report.", pattern=r"\S", form="not blank")
    ]
    question: Annotated[str, entry("The question in the reader's words; shown at the top of the report.")] = (
        ""
    )


class Steam(Section):
    """Pressures and temperatures of the site."""

    process_pressure_bar_g: Annotated[
        float, quantity("bar g", "Lowest pressure the process can work with.", at_least=0.0, at_most=198.9)
    ]
    boiler_pressure_bar_g: Annotated[
        float, quantity("bar g", "Pressure the boilers work at today.", at_least=0.0, at_most=198.9)
    ]
    feedwater_temperature_degc: Annotated[
        float,
        quantity(
            "degC", "Feedwater behind the deaerator, ahead of any economiser.", at_least=1.0, at_most=300.0
        ),
    ]
    blowdown_percent: Annotated[
        float,
        quantity("%", "Water blown down, over what blowdown_basis says.", at_least=0.0, at_most=50.0),
    ] = 4.0
    blowdown_basis: Annotated[
        Literal["steam", "feedwater"],
        entry(
            "What blowdown_percent is over: 'steam' made, or 'feedwater' as water treaters state it (r over"
            " feedwater is r / (1 - r) over steam)."
        ),
    ] = "steam"
    charging_pressure_drop_bar: Annotated[
        float,
        quantity("bar", "Pressure lost from boiler to charged vessel.", at_least=0.0, at_most=20.0),
    ] = 0.5
    discharging_pressure_drop_bar: Annotated[
        float,
        quantity(
            "bar",
            "Pressure lost from discharged vessel to process (reducing valve, pipe).",
            at_least=0.0,
            at_most=20.0,
        ),
    ] = 0.5
    ambient_temperature_degc: Annotated[
        float, quantity("degC", "Air around boilers and vessel.", at_least=-50.0, at_most=60.0)
    ] = 20.0


class Fuel(Section):
    """What the boilers burn and what it costs."""

    kind: Annotated[FuelKind, entry("Fuel of all boilers.")]
    calorific_basis: Annotated[
        CalorificBasis,
        entry(
            "Basis of price_per_mwh and of every fuel energy shown: 'lhv' net (lower) or 'hhv' gross (higher)"
            " calorific value. Gas is mostly billed gross. For electricity both are the same."
        ),
    ]
    price_per_mwh: Annotated[
        float,
        quantity(
            "currency/MWh",
            "Price of fuel at the price date, on calorific_basis; below zero only for electricity.",
            at_least=-LARGEST_PRICE_PER_MWH,
            at_most=LARGEST_PRICE_PER_MWH,
        ),
    ]
    price_escalation_percent_per_year: Annotated[
        float,
        quantity("%/a", "Yearly change of the fuel price, on money.rate_basis.", above=-100.0, at_most=100.0),
    ] = 0.0
    carbon_price_per_t: Annotated[
        float,
        quantity("currency/t CO2", "Price of emitted CO2 at the price date.", at_least=0.0, at_most=1.0e5),
    ] = 0.0
    carbon_escalation_percent_per_year: Annotated[
        float,
        quantity(
            "%/a", "Yearly change of the carbon price, on money.rate_basis.", above=-100.0, at_most=100.0
        ),
    ] = 0.0
    lhv_to_hhv: Annotated[
        float | None,
        quantity(
            "1",
            "Net over gross calorific value of the fuel as delivered.",
            above=0.5,
            at_most=1.0,
            when_left_out="published value of the fuel",
        ),
    ] = None
    co2_kg_per_gj_lhv: Annotated[
        float | None,
        quantity(
            "kg/GJ",
            "CO2 per net calorific value that carbon_price_per_t is paid for.",
            at_least=0.0,
            at_most=300.0,
            when_left_out="published value of the fuel",
        ),
    ] = None


class Vessel(Section):
    """What steam accumulator the site could buy. Leave the section out where none is in question."""

    smallest_volume_m3: Annotated[
        float, quantity("m3", "Smallest vessel considered.", above=0.0, at_most=5000.0)
    ]
    largest_volume_m3: Annotated[
        float, quantity("m3", "Largest vessel considered.", above=0.0, at_most=5000.0)
    ]
    charged_pressures_bar_g: Annotated[
        tuple[Annotated[float, quantity("bar g", "A charged pressure.", at_least=0.0, at_most=198.9)], ...],
        entry(
            "Pressures the vessel could be charged to [bar g]; each at most the highest boiler"
            " design_pressure_bar_g less steam.charging_pressure_drop_bar.",
            shortest=1,
        ),
    ]
    discharged_pressures_bar_g: Annotated[
        tuple[
            Annotated[float, quantity("bar g", "A discharged pressure.", at_least=0.0, at_most=198.9)], ...
        ],
        entry(
            "Pressures the vessel could be discharged to [bar g]; each at least steam.process_pressure_bar_g"
            " plus steam.discharging_pressure_drop_bar. Every pair of a charged and a lower discharged"
            " pressure is a window the plan may choose.",
            shortest=1,
        ),
    ]
    charged_fill_percent: Annotated[
        float,
        quantity(
            "%",
            "Liquid share of the volume when charged; the rest is steam space.",
            at_least=20.0,
            at_most=95.0,
        ),
    ] = 90.0
    length_to_diameter_ratio: Annotated[
        float,
        quantity("1", "Cylinder length over diameter of the horizontal vessel.", at_least=0.5, at_most=20.0),
    ] = 3.5
    release_limit_kg_m2_h_per_bar: Annotated[
        float,
        quantity(
            "kg/(m2 h bar)",
            "Largest steam release per free water surface and bar absolute at the discharged state.",
            above=0.0,
            at_most=2000.0,
        ),
    ] = 220.0
    heat_loss_w_m2_k: Annotated[
        float,
        quantity("W/(m2 K)", "Heat loss through the insulated surface.", at_least=0.0, at_most=20.0),
    ] = 0.6
    make_up_temperature_degc: Annotated[
        float | None,
        quantity(
            "degC",
            "Temperature of the water that keeps the vessel's inventory.",
            at_least=1.0,
            at_most=300.0,
            when_left_out="steam.feedwater_temperature_degc",
        ),
    ] = None
    reference_volume_m3: Annotated[
        float,
        quantity("m3", "Volume of the vessel that reference_installed_cost buys.", above=0.0, at_most=5000.0),
    ]
    reference_design_pressure_bar_g: Annotated[
        float, quantity("bar g", "Design pressure of that vessel.", at_least=0.0, at_most=198.9)
    ]
    reference_installed_cost: Annotated[
        float,
        quantity(
            "currency",
            "That vessel delivered, insulated, piped and commissioned, before contingency.",
            at_least=0.0,
            at_most=1.0e10,
        ),
    ]
    volume_exponent: Annotated[
        float,
        quantity("1", "Cost goes with (volume / reference volume) to this power.", above=0.0, at_most=1.0),
    ] = 0.6
    cost_change_percent_per_bar: Annotated[
        float,
        quantity(
            "%/bar",
            "Change of cost per bar of charged pressure above reference_design_pressure_bar_g (below it,"
            " less).",
            at_least=0.0,
            at_most=50.0,
        ),
    ] = 0.0
    life_years: Annotated[int, quantity("a", "Years until it is replaced.", at_least=1, at_most=60)]
    maintenance_per_year: Annotated[
        float,
        quantity(
            "currency/a", "Inspection and maintenance per year while it stands.", at_least=0.0, at_most=1.0e9
        ),
    ]
