"""Factor tables of the life-cycle-cost guides.

Sources: NIST Handbook 135 and its annual supplement (check table 4a: formula values that match the
printed tables) and check rows E1, E2 and E11.
"""

import numpy_financial
import pytest
from printed import Printed

from evenfire.money.factors import (
    capital_recovery_factor,
    escalating_present_value,
    single_present_value,
    uniform_present_value,
)

TABLE = "NIST Handbook 135, discount factor tables (check table 4a)"
ROWS = """
3 10 0.744094 8.530203 0.117231
3 15 0.641862 11.937935 0.083767
3 20 0.553676 14.877475 0.067216
3 25 0.477606 17.413148 0.057428
5 10 0.613913 7.721735 0.129505
5 15 0.481017 10.379658 0.096342
5 20 0.376889 12.462210 0.080243
5 25 0.295303 14.093945 0.070952
7 10 0.508349 7.023582 0.142378
7 15 0.362446 9.107914 0.109795
7 20 0.258419 10.594014 0.094393
7 25 0.184249 11.653583 0.085811
8 10 0.463193 6.710081 0.149029
8 15 0.315242 8.559479 0.116830
8 20 0.214548 9.818147 0.101852
8 25 0.146018 10.674776 0.093679
10 10 0.385543 6.144567 0.162745
10 15 0.239392 7.606080 0.131474
10 20 0.148644 8.513564 0.117460
10 25 0.092296 9.077040 0.110168
12 10 0.321973 5.650223 0.176984
12 15 0.182696 6.810864 0.146824
12 20 0.103667 7.469444 0.133879
12 25 0.058823 7.843139 0.127500
"""


@pytest.mark.parametrize("row", ROWS.strip().splitlines())
def test_factors_are_those_of_the_table(row):
    """Single, uniform and capital recovery factors agree to the last printed digit (table 4a)."""
    percent, years, single, uniform, recovery = row.split()
    rate, n = float(percent) / 100.0, int(years)
    place = f"{TABLE}, {percent} %, {years} a"
    Printed(single, "1", place).check(single_present_value(rate, n))
    Printed(uniform, "a", place).check(uniform_present_value(rate, n))
    Printed(recovery, "1/a", place).check(capital_recovery_factor(rate, n))


@pytest.mark.parametrize(
    ("rate", "escalation", "years", "text"),
    [(0.03, 0.02, 20, "18.081229"), (0.08, 0.03, 15, "10.482592"), (0.03, -0.01, 15, "11.087041")],
)
def test_escalating_factor_is_that_of_the_guides(rate, escalation, years, text):
    """The modified uniform present value agrees to the last digit (E1)."""
    Printed(text, "a", "check row E1").check(escalating_present_value(rate, escalation, years))


def test_equal_rates_give_the_number_of_years():
    """Where escalation equals the discount rate, every year counts one (E2)."""
    assert escalating_present_value(0.05, 0.05, 10) == pytest.approx(10.0, abs=1e-12)


def test_nearly_equal_rates_lose_no_digits():
    """A ten-millionth of a millionth beside the singular case, the factor is still years to 1e-11."""
    assert escalating_present_value(0.05, 0.05 + 1e-13, 10) == pytest.approx(10.0, rel=1e-11)


@pytest.mark.parametrize(("rate", "years"), [(0.08, 15), (0.03, 40), (-0.02, 12), (0.5, 3)])
def test_factors_agree_with_a_finance_library(rate, years):
    """Uniform present value and capital recovery equal pv and pmt of numpy-financial."""
    assert uniform_present_value(rate, years) == pytest.approx(
        -numpy_financial.pv(rate, years, 1.0), rel=1e-12
    )
    assert capital_recovery_factor(rate, years) == pytest.approx(
        -numpy_financial.pmt(rate, years, 1.0), rel=1e-12
    )


def test_rate_zero_counts_every_year_one():
    """Without interest, seven years are worth seven yearly amounts."""
    assert uniform_present_value(0.0, 7) == 7.0
    assert capital_recovery_factor(0.0, 7) == pytest.approx(1.0 / 7.0, rel=1e-15)


def test_annuity_of_a_loan_is_the_printed_one():
    """100 000 at 8 % over 15 years, as equal yearly amounts, and what 25 000 a year is worth (E11)."""
    Printed("11682.954494", "1/a", "check row E11").check(100_000.0 * capital_recovery_factor(0.08, 15))
    Printed("213986.967198", "1", "check row E11").check(25_000.0 * uniform_present_value(0.08, 15))
