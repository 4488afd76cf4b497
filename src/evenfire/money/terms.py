"""Prices, investments and yearly quantities, as plain frozen data.

Energy is on net calorific value, in joules; money is in the case's currency at its price date.
Year 0 is the investment, years 1 to the horizon are operation, and every amount is paid at the end
of its year. Nominal amounts contain inflation, real amounts are in the price date's money.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Tax:
    """Profit tax of an owner whose other income uses up every deduction in its year."""

    rate: float
    """Share of profit paid as tax [1]; the discount rate must then be one after tax."""
    depreciation_shares: tuple[float, ...]
    """Share of a purchase deducted in the 1st, 2nd, ... year after it [1]; they sum to one."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Grant:
    """Money towards a first purchase that need not be paid back."""

    share: float
    """Share of the purchase price without contingency [1]."""
    years_after_purchase: int = 0


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
    """Share added to every investment and its replacements [1]."""
    inflation: float = 0.0
    """General price rise per year [1]; links real and nominal amounts."""
    tax: Tax | None = None
    reinvestment_rate: float | None = None
    """What yearly savings earn until the horizon [1]; None for the discount rate."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Price:
    """A price with its yearly change, on the basis of ``Finance.rate_basis``."""

    amount: float
    """Price at the price date, per unit of the quantity it prices."""
    escalation: float = 0.0
    """Change per year [1]; year n is paid at amount * (1 + escalation)**n."""
    path: tuple[tuple[int, float], ...] = ()
    """(year after the price date, price) in rising years; straight lines lead from ``amount`` in year 0
    through these points, and ``escalation`` holds from the last of them on."""


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
    year: int = 0
    """Year in which it is bought and its life begins."""
    payments: tuple[tuple[int, float], ...] = ((0, 1.0),)
    """(years after the purchase, share of its price) of a contract whose sums do not follow inflation."""
    escalation: float | None = None
    """Change of its price per year on the basis of ``Finance.rate_basis`` [1]; None for general inflation."""
    replacement_amount: float | None = None
    """Cost of a replacement before contingency at the price date's prices; None for ``amount``."""
    residual_value: float | None = None
    """Value at the horizon at the price date's prices; None for the straight-line unused part."""
    grant: Grant | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class CostBasis:
    """How a published cost correlation is brought to the case's place and date."""

    correlation: str
    """Name of one of ``cost_basis.CORRELATIONS``."""
    cost_index: float
    """The correlation's own cost index at the case's price date [1]."""
    currency_per_usd: float
    """The case's currency for one US dollar at the price date."""
    location_factor: float = 1.0
    """Cost in the case's region over cost on the US Gulf Coast [1]."""
    installation_factor: float | None = None
    """Installed over purchased cost [1]; None for the factor that the source gives."""
