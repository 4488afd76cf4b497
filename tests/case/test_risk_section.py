"""What is uncertain: what the section says and what it cannot mean."""

from __future__ import annotations

import pytest

from evenfire.case.load import load_case

FUEL = """
[[risk.uncertain]]
quantity = "fuel price"
distribution = "triangular"
low_percent = -20
likely_percent = 5
high_percent = 40
yearly_volatility_percent = 8
"""
LAST = "unmet_steam_price_per_t = 300.0\n"


def test_a_risk_section_becomes_shares(write_example):
    """Percent become shares; scenarios and seed have defaults."""
    risk = load_case(write_example((LAST, LAST + FUEL))).risk
    assert (risk.scenarios, risk.seed) == (10_000, 1)
    (fuel,) = risk.uncertain
    assert (fuel.low_deviation, fuel.likely_deviation, fuel.high_deviation) == (-0.2, 0.05, 0.4)
    assert fuel.yearly_volatility == pytest.approx(0.08)


def test_a_case_without_the_section_has_no_risk(write_example):
    """Nothing is assumed to be uncertain."""
    assert load_case(write_example()).risk is None


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ((("low_percent = -20", "low_percent = 50"),), "low_percent: found 50 %; must be below"),
        ((("likely_percent = 5", "likely_percent = 60"),), "likely_percent: found 60 %; must lie between"),
        ((('"triangular"', '"uniform"'),), "likely_percent: found 5 %; belongs to distribution"),
        ((('"fuel price"', '"maintenance"'),), "yearly_volatility_percent: found 8 %; belongs to"),
        (
            (("yearly_volatility_percent = 8", "correlation_with_fuel_price = 0.5"),),
            "correlation_with_fuel_price: found 0.5; needs another quantity",
        ),
    ],
)
def test_what_cannot_be_meant_is_refused(write_example, problems_of, changes, words):
    """C151 names the quantity, the key, what was found and what is allowed."""
    text = FUEL
    for old, new in changes:
        assert old in text
        text = text.replace(old, new)
    (line,) = problems_of(write_example((LAST, LAST + text)))
    assert words in line
    assert line.endswith("[C151]")


def test_a_quantity_stated_twice_is_refused(write_example, problems_of):
    """Two fuel prices in one section."""
    (line,) = problems_of(write_example((LAST, LAST + FUEL + FUEL)))
    assert "stated 2 times" in line


def test_a_deviation_of_all_there_is_is_refused(write_example, problems_of):
    """A price cannot lose 100 % or more."""
    (line,) = problems_of(write_example((LAST, LAST + FUEL.replace("= -20", "= -100"))))
    assert "above -100" in line


def test_a_wrong_number_of_trials_is_refused(write_example, problems_of):
    """The replay's section is read like every other."""
    (line,) = problems_of(write_example((LAST, LAST + "[replay]\ntrials = 5\n")))
    assert line.startswith("case.toml: replay.trials: found 5")
