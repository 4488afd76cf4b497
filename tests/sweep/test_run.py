"""A sweep as a whole: points, two inputs at once, ranking, and what cannot be varied."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from pathlib import Path

import pytest

from evenfire.case.load import load_case
from evenfire.errors import CaseError, SweepError
from evenfire.report.page_sweep import sweep_page
from evenfire.report.sweep_document import sweep_document, sweep_table
from evenfire.sweep.axis import axis
from evenfire.sweep.run import SweepRequest, sweep
from evenfire.sweep.strand import Strand, strand_record
from evenfire.sweep.study import swept_case
from evenfire.sweep.usual import usual_request
from tests.sweep.tiny_case import write_tiny_case

GAP = 0.01


@pytest.fixture(scope="module")
def tiny_case(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_tiny_case(
        tmp_path_factory.mktemp("run") / "tiny", "as is", "bigger boiler", "further boiler"
    )


@pytest.fixture(scope="module")
def two_inputs(tiny_case: Path, tmp_path_factory: pytest.TempPathFactory):
    request = SweepRequest(
        case=tiny_case,
        axes=(axis("fuel.price_per_mwh=5:200:5"), axis("money.discount_rate_percent=2:14:3")),
    )
    return sweep(request, tmp_path_factory.mktemp("two") / "kept")[0]


def test_two_inputs_give_every_pair_in_order(two_inputs):
    """Five prices by three rates, the last input fastest; exact along the price, which alone is straight."""
    assert [point.values for point in two_inputs.points] == [
        (price, rate) for price in (5.0, 53.75, 102.5, 151.25, 200.0) for rate in (2.0, 8.0, 14.0)
    ]
    assert (two_inputs.along, two_inputs.straight) == (0, True)


def test_every_point_of_two_inputs_is_that_of_a_search_of_its_own(tiny_case, two_inputs):
    """Bounds of the sweep and costs of single searches, and the reverse, cannot cross; gaps are as asked."""
    for point in two_inputs.points[::4]:
        changes = tuple(zip((each.path for each in two_inputs.inputs), point.values, strict=True))
        alone = strand_record(
            Strand(
                case=tiny_case,
                points=(changes,),
                along_line=False,
                gap=1e-4,
                time_limit_s=20.0,
                plans_folder=None,
            )
        )["points"][0]
        for ours, own in zip(point.alternatives, alone, strict=True):
            assert ours.name == own["name"]
            assert ours.gap <= GAP * (1 + 1e-9)
            assert ours.bound <= own["net_present_cost"] * (1 + 1e-9)
            assert own["bound"] <= ours.net_present_cost * (1 + 1e-9)


def test_break_evens_and_stretches_of_two_inputs_name_the_other_value(two_inputs):
    """At each discount rate stretches cover the price range without holes, and break-evens lie inside."""
    for rate in (2.0, 8.0, 14.0):
        row = [each for each in two_inputs.stretches if each.at == (rate,)]
        assert (row[0].low, row[-1].high) == (5.0, 200.0)
        assert all(a.high == b.low for a, b in pairwise(row))
    for each in two_inputs.break_evens:
        assert 5.0 <= each.low <= each.value <= each.high <= 200.0


def test_the_document_has_what_the_page_and_the_table_have(two_inputs):
    """`points`, `break_evens` and `stretches` with the keys that are promised; a row per alternative."""
    document = sweep_document(two_inputs)
    first = document["points"][0]
    assert first["values"] == {"fuel.price_per_mwh": 5.0, "money.discount_rate_percent": 2.0}
    assert {"name", "net_present_cost", "bound", "gap", "boilers", "vessel_volume_m3"} <= set(
        first["alternatives"][0]
    )
    assert all({"alternatives", "value", "low", "high"} <= set(each) for each in document["break_evens"])
    assert all({"winner", "low", "high"} <= set(each) for each in document["stretches"])
    assert len(sweep_table(two_inputs).splitlines()) == 1 + 15 * 3
    assert "The cheapest alternative over both inputs" in sweep_page(two_inputs)


def test_inputs_are_ranked_by_what_they_move(tiny_case, tmp_path):
    """Each group of inputs low and high; the largest swing first, the fuel price among them."""
    result, forget = sweep(SweepRequest(case=tiny_case, axes=(), rank_percent=20.0), tmp_path / "kept")
    forget()
    swings = [each.swing for each in result.ranking]
    assert swings == sorted(swings, reverse=True)
    names = {each.name: each for each in result.ranking}
    assert {"fuel price", "discount rate", "cost of new boilers"} <= set(names)
    fuel = names["fuel price"]
    assert (fuel.low.factor, fuel.high.factor) == pytest.approx((0.8, 1.2))
    for low, high in zip(fuel.low.net_present_cost, fuel.high.net_present_cost, strict=True):
        assert low < high < 1.5 * low
    for each in result.ranking:
        for end in (each.low, each.high):
            reference, *others = end.net_present_cost
            assert end.saving in [reference - other for other in others]
    assert swings[0] > 0.0
    assert "Which input matters" in sweep_page(result)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("fuel.price_per_mwh", "S101"),
        ("fuel.price_per_mwh=20:120", "S101"),
        ("fuel.price_per_mwh=a:b:c", "S101"),
        ("fuel.price_per_mwh=120:20:11", "S102"),
        ("fuel.price_per_mwh=20:inf:11", "S102"),
        ("fuel.price_per_mwh=20:120:1", "S103"),
    ],
)
def test_an_axis_that_cannot_be_meant_is_refused(text, code):
    """The code and the text itself stand in the message."""
    with pytest.raises(SweepError, match=code) as caught:
        axis(text)
    assert text in str(caught.value)


@pytest.mark.parametrize(
    ("paths", "code"),
    [
        (("fuel.price_per_mwh",) * 2, "S105"),
        (("fuel.price_per_mwh", "money.water_price_per_m3", "money.discount_rate_percent"), "S104"),
    ],
)
def test_inputs_that_cannot_be_varied_together_are_refused(tiny_case, tmp_path, paths, code):
    """Twice the same input, and three inputs."""
    axes = tuple(axis(f"{path}=2:3:2") for path in paths)
    with pytest.raises(SweepError, match=code):
        sweep(SweepRequest(case=tiny_case, axes=axes), tmp_path / "kept")


def test_an_unknown_path_is_refused_with_the_nearest(tiny_case, tmp_path):
    """C123 offers what was probably meant."""
    with pytest.raises(CaseError, match=r"fuel\.price_per_mwh.*C123"):
        sweep(SweepRequest(case=tiny_case, axes=(axis("fuel.price_per_mw=20:120:3"),)), tmp_path / "kept")


def test_a_value_that_the_case_refuses_is_refused_before_anything_is_planned(tiny_case, tmp_path):
    """A negative price of gas at one end."""
    with pytest.raises(CaseError, match="price_per_mwh"):
        sweep(SweepRequest(case=tiny_case, axes=(axis("fuel.price_per_mwh=-5:50:3"),)), tmp_path / "kept")
    assert not (tmp_path / "kept").exists()


def test_a_ranking_by_everything_is_refused(tiny_case, tmp_path):
    """S107: a share of 100 % would leave nothing."""
    with pytest.raises(SweepError, match="S107"):
        sweep(SweepRequest(case=tiny_case, axes=(), rank_percent=100.0), tmp_path / "kept")


def test_the_usual_question_is_the_fuel_price_and_the_ranking(tiny_case):
    """Half to double of the stated 45 EUR/MWh, and every input by a fifth."""
    request = usual_request(tiny_case)
    (fuel,) = request.axes
    assert (fuel.path, fuel.low, fuel.high) == ("fuel.price_per_mwh", 22.5, 90.0)
    assert request.rank_percent == 20.0


def test_staggered_starts_are_left_out_and_said_to_be(tiny_case):
    """They have a demand of their own, which no sweep changes; nor can they be a sweep's reference."""
    case = load_case(tiny_case)
    names = ("as is", "staggered starts")
    swept, (notice,) = swept_case(replace(case, plan=replace(case.plan, alternatives=names)))
    assert swept.plan.alternatives == ("as is",)
    assert notice.code == "S190"
    with pytest.raises(SweepError, match="S111"):
        swept_case(replace(case, plan=replace(case.plan, alternatives=names, reference="staggered starts")))
    assert swept_case(case) == (case, ())
