"""Prices, investments and yearly quantities, as plain frozen data.

Energy is on net calorific value, in joules; money is in the case's currency at its price date.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Finance:
    """How amounts of different years are put on one basis."""

    currency: str
    price_date: str
    horizon_years: int
    discount_rate: float
    """Per year [1]; real or nominal as ``rate_basis`` says."""
    rate_basis: str
    """``real`` or ``nominal``; escalations are stated on the same basis."""
    contingency: float = 0.0
    """Share added to every investment [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Price:
    """A price with its yearly change, on the basis of ``Finance.rate_basis``."""

    amount: float
    """Price at the price date, per unit of the quantity it prices."""
    escalation: float = 0.0
    """Change per year [1]; year n is paid at amount * (1 + escalation)**n."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Prices:
    """What the yearly quantities cost."""

    fuel_per_j_lhv: Price
    carbon_per_kg: Price
    electricity_per_j: Price
    water_per_kg: Price
    """Feed water including treatment [currency/kg]."""
    unmet_steam_per_kg: Price
    maintenance: Price
    """Escalation of maintenance and burner starts; amount is 1 (quantities are already money)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class YearlyQuantities:
    """What one year of operation uses; the same every year of the horizon."""

    fuel_j_lhv: float
    co2_kg: float
    electricity_j: float
    water_kg: float
    unmet_steam_kg: float
    burner_start_cost: float
    """Wear of burner starts at the price date's prices [currency/a]."""
    maintenance_cost: float
    """Boilers' and vessel's maintenance and inspection at the price date's prices [currency/a]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Investment:
    """One thing bought."""

    name: str
    amount: float
    """Installed cost before contingency at the price date's prices [currency]."""
    life_years: int
    """Replaced at the same real price after this many years; the unused part is the residual value."""
