"""The boiler sections of a case file: those that stand and those that can be bought."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_section import Section, entry, quantity

CalorificBasis = Literal["lhv", "hhv"]
RatingBasis = Literal["actual", "from_and_at_100c"]


class LoadPoint(Section):
    """One point of a boiler's part-load efficiency."""

    load_percent: Annotated[
        float,
        quantity("%", "Steam output over rated output, while firing steadily.", above=0.0, at_most=100.0),
    ]
    efficiency_percent: Annotated[
        float,
        quantity(
            "%",
            "Heat into steam over heat in fuel, casing loss included, blowdown excluded; on the boiler's"
            " calorific_basis. On net calorific value it cannot exceed 100 %.",
            at_least=10.0,
            at_most=100.0,
        ),
    ]


class StackReading(Section):
    """What a flue gas analyser shows at one load."""

    load_percent: Annotated[
        float,
        quantity("%", "Steam output over rated output, while firing steadily.", above=0.0, at_most=100.0),
    ]
    stack_temperature_degc: Annotated[
        float,
        quantity(
            "degC",
            "Flue gas behind the last heating surface in place; ahead of an economiser that is added.",
            at_least=0.0,
            at_most=500.0,
        ),
    ]
    o2_percent: Annotated[
        float | None,
        quantity("%", "Oxygen in dry flue gas; this or co2_percent.", at_least=0.0, at_most=18.0),
    ] = None
    co2_percent: Annotated[
        float | None,
        quantity("%", "Carbon dioxide in dry flue gas; this or o2_percent.", above=0.0, at_most=21.0),
    ] = None


class Economiser(Section):
    """An economiser added behind the boiler whose stack readings are given."""

    effectiveness_percent: Annotated[
        float,
        quantity("%", "Drop of the gas temperature over the largest possible one.", above=0.0, below=100.0),
    ]
    water_temperature_degc: Annotated[
        float | None,
        quantity(
            "degC",
            "Water into the economiser.",
            at_least=1.0,
            at_most=300.0,
            when_left_out="steam.feedwater_temperature_degc",
        ),
    ] = None


class BoilerType(Section):
    """Keys that a boiler in place and a boiler on offer share."""

    rating_basis: Annotated[
        RatingBasis,
        entry(
            "Conditions of every rating_kg_h of this section: 'actual' at boiler pressure and feedwater"
            " temperature of the site, or 'from_and_at_100c' as on many nameplates (water at 100 degC to"
            " steam at 100 degC, 2256.5 kJ/kg), which is converted."
        ),
    ]
    design_pressure_bar_g: Annotated[
        float, quantity("bar g", "Highest pressure the boiler may work at.", above=0.0, at_most=198.9)
    ]
    turndown_ratio: Annotated[
        float,
        quantity(
            "1",
            "Rated output over smallest continuous firing output; below that the burner cycles."
            " 1 is an on/off burner.",
            at_least=1.0,
            at_most=100.0,
        ),
    ]
    calorific_basis: Annotated[
        CalorificBasis,
        entry(
            "Basis of the boiler's efficiencies: 'lhv' net (lower) or 'hhv' gross (higher) calorific value."
        ),
    ]
    efficiency_points: Annotated[
        tuple[LoadPoint, ...] | None,
        entry(
            "Efficiency at several loads, rising in load_percent, from the smallest continuous firing load"
            " (100 % / turndown_ratio) or below it to 100 %; fuel runs straight between the points.",
            shortest=1,
            when_left_out="from stack_readings, which must then be stated",
        ),
    ] = None
    stack_readings: Annotated[
        tuple[StackReading, ...] | None,
        entry(
            "Stack temperature and oxygen (or carbon dioxide) over the same range of loads. They make the"
            " efficiency by the Siegert formula and the casing loss; where efficiency_points are stated too,"
            " they check them.",
            shortest=1,
            when_left_out="efficiency_points must be stated",
        ),
    ] = None
    combustion_air_temperature_degc: Annotated[
        float | None,
        quantity(
            "degC",
            "Air to the burner while the stack was read; needs stack_readings.",
            at_least=-50.0,
            at_most=200.0,
            when_left_out="steam.ambient_temperature_degc",
        ),
    ] = None
    economiser: Annotated[
        Economiser | None,
        entry(
            "An economiser that is to be added behind the boiler as it was read; needs stack_readings.",
            when_left_out="none is added",
        ),
    ] = None
    efficiency_pressure_bar_g: Annotated[
        float | None,
        quantity(
            "bar g",
            "Boiler pressure at which the efficiency or the stack was measured or is guaranteed.",
            at_least=0.0,
            at_most=198.9,
            when_left_out="steam.boiler_pressure_bar_g",
        ),
    ] = None
    burner_pressure_band_bar: Annotated[
        float,
        quantity(
            "bar",
            "Difference between the boiler pressures at which the burner cuts out and cuts in.",
            above=0.0,
            at_most=10.0,
        ),
    ] = 1.0
    minimum_firing_minutes: Annotated[
        float,
        quantity("min", "Shortest time the burner fires once lit.", at_least=0.0, at_most=1440.0),
    ] = 10.0
    minimum_off_minutes: Annotated[
        float,
        quantity(
            "min",
            "Shortest time from flame out to flame, purges and restart lock included.",
            at_least=0.0,
            at_most=1440.0,
        ),
    ] = 5.0
    cold_start_minutes: Annotated[
        float | None,
        quantity(
            "min",
            "Time from cold to steam at boiler pressure.",
            above=0.0,
            at_most=2880.0,
            when_left_out="that fuel burnt at lowest firing",
        ),
    ] = None
    ramp_percent_per_minute: Annotated[
        float | None,
        quantity(
            "% of rating/min",
            "Largest change of output while firing.",
            above=0.0,
            at_most=1000.0,
            when_left_out="the rating in two minutes, common practice",
        ),
    ] = None
    purge_seconds: Annotated[
        float | None,
        quantity(
            "s",
            "Purging before and after firing, together, per burner start.",
            at_least=0.0,
            at_most=3600.0,
            when_left_out="60 s",
        ),
    ] = None
    purge_gas_temperature_degc: Annotated[
        float | None,
        quantity(
            "degC",
            "Temperature at which the purge air leaves the hot boiler.",
            at_least=0.0,
            at_most=400.0,
            when_left_out="150 degC",
        ),
    ] = None
    stack_loss_percent_per_k: Annotated[
        float | None,
        quantity(
            "%/K",
            "Points of efficiency (net basis) lost per kelvin of hotter stack; used where another boiler"
            " pressure moves the stack temperature.",
            at_least=0.0,
            at_most=1.0,
            when_left_out="Siegert slope of the fuel, at the oxygen read or at 3 %",
        ),
    ] = None
    start_wear_cost: Annotated[
        float,
        quantity(
            "currency/start", "Wear of burner and boiler per burner start.", at_least=0.0, at_most=1.0e5
        ),
    ] = 0.0


class RatedBoiler(Section):
    """Keys of one boiler of one rating."""

    rating_kg_h: Annotated[
        float, quantity("kg/h", "Rated steam output on rating_basis.", at_least=50.0, at_most=500_000.0)
    ]
    standing_loss_kw: Annotated[
        float | None,
        quantity(
            "kW",
            "Heat lost through casing and stack while hot and not firing.",
            at_least=0.0,
            at_most=10_000.0,
            when_left_out="from rating and boiler pressure",
        ),
    ] = None
    casing_loss_kw: Annotated[
        float | None,
        quantity(
            "kW",
            "Heat lost by radiation and convection while firing, the same at every load; needs"
            " stack_readings.",
            at_least=0.0,
            at_most=10_000.0,
            when_left_out="from rating and boiler pressure",
        ),
    ] = None
    water_content_m3: Annotated[
        float | None,
        quantity(
            "m3",
            "Water of the boiler at normal level; with the burner's pressure band it is the boiler's own"
            " store.",
            above=0.0,
            at_most=1000.0,
            when_left_out="from the rating",
        ),
    ] = None
    purge_energy_kwh: Annotated[
        float | None,
        quantity(
            "kWh/start",
            "Heat of the boiler carried off by purge air at each burner start.",
            at_least=0.0,
            at_most=1000.0,
            when_left_out="purge air over purge_seconds at purge_gas_temperature_degc",
        ),
    ] = None
    purge_air_kg_h: Annotated[
        float | None,
        quantity(
            "kg/h",
            "Air blown through the hot boiler while purging.",
            above=0.0,
            at_most=1.0e6,
            when_left_out="combustion air of full firing at 15 % excess air",
        ),
    ] = None
    cold_start_fuel_kwh_lhv: Annotated[
        float | None,
        quantity(
            "kWh/start",
            "Fuel, on net calorific value, that brings the cold boiler to pressure.",
            at_least=0.0,
            at_most=1.0e6,
            when_left_out="heating water and steel from ambient at lowest firing",
        ),
    ] = None
    maintenance_per_year: Annotated[
        float,
        quantity(
            "currency/a", "Maintenance and inspection per year while it stands.", at_least=0.0, at_most=1.0e9
        ),
    ]


class ExistingBoiler(BoilerType, RatedBoiler):
    """A boiler that stands on the site."""

    name: Annotated[
        str, entry("What the site calls it; unique in the case.", pattern=r"\S", form="not blank")
    ]


class BoilerSize(RatedBoiler):
    """One size that can be bought."""

    installed_cost: Annotated[
        float,
        quantity(
            "currency",
            "Boiler delivered, installed and commissioned, before contingency.",
            at_least=0.0,
            at_most=1.0e10,
        ),
    ]


class NewBoiler(BoilerType):
    """The boilers that can be bought: one kind in several sizes."""

    life_years: Annotated[int, quantity("a", "Years until it is replaced.", at_least=1, at_most=60)]
    sizes: Annotated[tuple[BoilerSize, ...], entry("The catalogue, one row per size.", shortest=1)]
