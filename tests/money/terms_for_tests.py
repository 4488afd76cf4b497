"""Plain terms that the money tests vary."""

from evenfire.money.terms import Finance, Price, Prices, YearlyQuantities

FREE = Price(amount=0.0)


def finance(**changes) -> Finance:
    """Fifteen years at 8 % nominal in euros, with the given changes."""
    terms = {
        "currency": "EUR",
        "price_date": "2026-10",
        "horizon_years": 15,
        "discount_rate": 0.08,
        "rate_basis": "nominal",
    }
    return Finance(**(terms | changes))


def prices(**changes) -> Prices:
    """Everything free but what is given; maintenance counts at its own amount."""
    free = {
        "fuel_per_j_lhv": FREE,
        "carbon_per_kg": FREE,
        "electricity_per_j": FREE,
        "water_per_kg": FREE,
        "unmet_steam_per_kg": FREE,
        "maintenance": Price(amount=1.0),
    }
    return Prices(**(free | changes))


def quantities(**changes) -> YearlyQuantities:
    """A plant that uses nothing but what is given."""
    nothing = dict.fromkeys(
        (
            "fuel_j_lhv",
            "co2_kg",
            "electricity_j",
            "water_kg",
            "unmet_steam_kg",
            "burner_start_cost",
            "maintenance_cost",
        ),
        0.0,
    )
    return YearlyQuantities(**(nothing | changes))
