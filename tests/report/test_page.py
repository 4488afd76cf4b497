"""The page: complete, ordered, self-contained, safe with any text, readable by everyone."""

from __future__ import annotations

import dataclasses
import re
import xml.etree.ElementTree as ET

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.appraisal.results import Appraisal, Payback
from evenfire.report.figures_demand import bucketed_t_h
from evenfire.report.page import report_page
from tests.report.made_appraisal import made_appraisal, made_record, without_vessels
from tests.report.page_reader import PageReader, read_page

SVG = "{http://www.w3.org/2000/svg}"
HOSTILE = "<script>alert(1)</script> & \"x\" 'y' $a_1$ {{ 7 * 7 }} _z"


def drawings(page_text: str) -> list[ET.Element]:
    return [ET.fromstring(svg) for svg in re.findall(r"<svg.*?</svg>", page_text, re.DOTALL)]


def test_page_is_well_formed(page: PageReader) -> None:
    """Every element that is opened is closed, in order."""
    assert page.unbalanced == []


def test_verdict_comes_first_then_cautions_then_the_table(page: PageReader, appraisal: Appraisal) -> None:
    """A reader with a minute meets verdict, cautions and the alternatives in this order."""
    places = [
        page.text.index(words)
        for words in (appraisal.verdict, "Pressurised steam and hot water kill", "Net present cost [thousand")
    ]
    assert places == sorted(places)


def test_cautions_stand_at_both_ends(page: PageReader) -> None:
    """The cautions stand before the first table and once more at the end."""
    for caution in ("water kill", "not for construction", "pressure-equipment law", "licensed engineers"):
        assert page.text.count(caution) >= 2
    assert page.text.rindex("licensed engineers") > page.text.rindex("SHA-256")


def test_no_result_is_called_a_design(page: PageReader) -> None:
    """What the page shows is a plan or a plant for an investment decision, never a design."""
    assert re.search(r"\bdesign", page.text, re.IGNORECASE) is None


def test_page_needs_no_network_and_runs_nothing(page: PageReader, page_text: str) -> None:
    """No script, no link, image, font or style from elsewhere; the page forbids them itself."""
    assert {tag for tag, _ in page.elements} & {"script", "link", "img", "iframe", "object", "embed"} == set()
    for _, attributes in page.elements:
        assert not any(name.startswith("on") for name in attributes)
        for name in ("src", "href", "xlink:href"):
            assert (attributes.get(name) or "#").startswith("#")
    assert re.findall(r"https?://[^\s\"<]+", page_text.replace("http://www.w3.org/2000/svg", "")) == []
    assert re.findall(r"url\((?!#)", page_text) == []
    policy = next(a for tag, a in page.elements if tag == "meta" and "http-equiv" in a)
    assert policy["content"] == "default-src 'none'; style-src 'unsafe-inline'"


def test_ids_are_unique_and_every_reference_has_its_target(page: PageReader, page_text: str) -> None:
    """Drawings in one page do not share ids, and no marker or clip path points nowhere."""
    ids = [attributes["id"] for _, attributes in page.elements if "id" in attributes]
    assert len(ids) == len(set(ids))
    assert set(re.findall(r"(?:href=\"|url\()#([^\")]+)", page_text)) <= set(ids)


def test_every_drawing_has_words_for_those_who_do_not_see_it(page_text: str) -> None:
    """Role, short title and description of each drawing exist and are wired to it."""
    found = drawings(page_text)
    assert len(found) == 4 + 4 * 4
    for svg in found:
        assert svg.get("role") == "img"
        title, description = svg.find(f"{SVG}title"), svg.find(f"{SVG}desc")
        assert title is not None
        assert description is not None
        assert svg.get("aria-labelledby") == f"{title.get('id')} {description.get('id')}"
        assert len(title.text or "") > 10
        assert len(description.text or "") > 30


def test_every_drawing_names_units_on_its_axes(page_text: str) -> None:
    """Each drawing has at least one axis label with a unit in brackets."""
    for svg in drawings(page_text):
        labels = " ".join("".join(text.itertext()) for text in svg.iter(f"{SVG}text"))
        assert re.search(r"\[(t/h|thousand EUR|%|h:min)\]", labels)


def test_table_shows_the_numbers_of_the_appraisal(page: PageReader) -> None:
    """The main table holds the appraisal's numbers, rounded, with thousands separated."""
    assert page.row("Net present cost [thousand EUR]")[1:] == ["8,900", "8,420", "8,391", "8,104", "–", "–"]
    assert page.row("Investment [thousand EUR]")[1:5] == ["0", "433", "292", "199"]
    assert page.row("Burner starts [1/a]")[1:5] == ["8,600", "8,600", "8,600", "1,250"]
    assert page.row("Unmet steam [t/a]")[1:5] == ["310.0", "0.0", "0.0", "0.0"]
    assert page.row("Proven gap")[3] == "1.41\u00a0%"
    assert page.row("Accumulator")[4] == "36.4\u00a0m³\n12.0 to 4.6\u00a0bar\u00a0g\ngives 2,105\u00a0kg"
    assert page.row("residual value")[2] == "−52,008"


def test_every_standing_has_its_words(page: PageReader) -> None:
    """A missed gap, an impossible alternative and a fruitless search are told apart in words."""
    assert page.row("Result")[1:] == [
        "planned",
        "planned",
        "planned, gap not reached",
        "planned",
        "no plan found",
        "not possible",
    ]
    assert "the search stopped before the asked gap" in page.text
    assert (
        "No plant of this kind can do what the case asks. The catalogue holds no electric boiler."
        in page.text
    )
    assert "this does not mean that there is none" in page.text


def test_gaps_say_who_could_still_win(page: PageReader) -> None:
    """An alternative is out only when its bound lies above the cheapest cost."""
    verdicts = {
        row[0]: row[5] for row in page.rows if len(row) == 6 and row[4] in ("time limit", "infeasible")
    }
    assert verdicts["further boiler"] == "no: its bound lies above the cheapest cost"
    assert verdicts["two small boilers"] == "not known: no bound"
    assert verdicts["no gas"] == "no: it cannot be built as the case stands"


def test_alternative_with_a_low_bound_could_still_win(appraisal: Appraisal) -> None:
    """A bound below the cheapest cost is said to leave the ranking open."""
    further = dataclasses.replace(appraisal.alternatives[2], bound=8_000_000.0)
    unsure = dataclasses.replace(
        appraisal, alternatives=(*appraisal.alternatives[:2], further, appraisal.alternatives[3])
    )
    assert "yes: its bound lies below the cheapest cost" in read_page(report_page(unsure)).text


def test_words_stand_where_there_is_no_payback(page: PageReader) -> None:
    """A payback that does not exist is told in words, never as a number."""
    assert page.row("Payback, simple")[1] == "the reference"
    assert page.row("Payback, discounted")[3] == "does not pay back when discounted"
    assert page.row("Payback, simple")[4] == "1.9\u00a0years"


def test_assumptions_are_told_apart_from_remarks(page: PageReader) -> None:
    """What the program assumed is listed as such; remarks and warnings are not."""
    origins = {row[2]: row[1] for row in page.rows if len(row) == 3 and re.fullmatch(r"[A-Z]\d{3}", row[2])}
    assert origins == {
        "C190": "assumed",
        "R145": "warning",
        "R191": "assumed",
        "R190": "warning",
        "A190": "remark",
        "A191": "warning",
    }


def test_command_hashes_and_versions_are_shown(page: PageReader) -> None:
    """A reader can repeat the run: command, SHA-256 of each input, versions."""
    assert "evenfire appraise 'cases/retort hall'" in page.text
    assert page.row("case.toml")[1] == "0f" * 32
    assert page.row("highspy")[1] == "1.16.0"


def test_user_text_is_shown_and_not_run() -> None:
    """Names that look like markup, template code or formulas appear letter by letter."""
    made = made_appraisal(HOSTILE)
    first = dataclasses.replace(
        made.alternatives[0],
        name=HOSTILE,
        note=HOSTILE,
        payback=Payback(simple_years=None, discounted_years=None, note=HOSTILE),
        boilers=tuple(dataclasses.replace(each, name=HOSTILE) for each in made.alternatives[0].boilers),
    )
    hostile = dataclasses.replace(
        made, alternatives=(first, *made.alternatives[1:]), reference=HOSTILE, verdict=HOSTILE
    )
    text = report_page(hostile)
    page = read_page(text)
    assert page.count("script") == 0
    assert page.unbalanced == []
    assert page.text.count(HOSTILE) > 10
    assert "<script" not in text
    labels = [
        "".join(each.itertext()).strip("\u200b") for svg in drawings(text) for each in svg.iter(f"{SVG}text")
    ]
    assert HOSTILE[:20] in {label[:20] for label in labels}


@settings(max_examples=4, deadline=None)
@given(name=st.text(st.characters(exclude_categories=["Cs"]), min_size=1, max_size=40))
def test_any_name_gives_a_page_that_can_be_read(name: str) -> None:
    """Control characters, signs of other scripts and odd punctuation do not break page or drawings."""
    made = without_vessels(made_appraisal(name))
    first = dataclasses.replace(made.alternatives[0], name=name)
    text = report_page(dataclasses.replace(made, alternatives=(first,)))
    assert read_page(text.replace("\0", "")).unbalanced == []
    assert len(drawings(text)) == 4 + 4


def test_page_without_any_plan_says_so(appraisal: Appraisal) -> None:
    """When no alternative has a plan the page still shows record, reasons and cautions."""
    nothing = dataclasses.replace(
        appraisal, alternatives=appraisal.alternatives[4:], best="", verdict="No alternative has a plan."
    )
    page = read_page(report_page(nothing))
    assert "No alternative has a plan, so there is no cost to show." in page.text
    assert page.text.count("water kill") == 2
    assert page.count("svg") == 3


@given(buckets=st.integers(1, 3000), seed=st.integers(0, 10))
@settings(max_examples=30, deadline=None)
def test_thinning_the_record_keeps_its_peak_and_its_steam(buckets: int, seed: int) -> None:
    """However coarse the stretches, highest and lowest step and the total stay what they are."""
    record = made_record(days=2, seed=seed)
    record = dataclasses.replace(record, flow_kg_s=record.flow_kg_s[: 2000 + seed])
    lowest, mean, highest, hours = bucketed_t_h(record, buckets)
    flow = record.flow_kg_s * 3.6
    assert float(highest.max()) == pytest.approx(float(flow.max()), rel=1e-12)
    assert float(lowest.min()) == pytest.approx(float(flow.min()), rel=1e-12)
    assert mean.size == min(buckets, flow.size)
    if flow.size % mean.size == 0:
        assert float(mean.mean()) == pytest.approx(float(flow.mean()), rel=1e-12)
    assert np.all(np.diff(hours) > 0.0)


@pytest.mark.parametrize("colour", ["ink", "faint", "blue"])
@pytest.mark.parametrize("ground", ["paper", "best"])
def test_text_has_the_contrast_that_wcag_asks(page_text: str, colour: str, ground: str) -> None:
    """Contrast of text is at least 4.5 : 1 (WCAG 2.2, success criterion 1.4.3, relative luminance)."""
    variables = dict(re.findall(r"--(\w+): #([0-9a-f]{6})", page_text))

    def luminance(name: str) -> float:
        channels = [int(variables[name][at : at + 2], 16) / 255.0 for at in (0, 2, 4)]
        red, green, blue = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels)
        return 0.2126 * red + 0.7152 * green + 0.0722 * blue

    dark, light = sorted((luminance(colour), luminance(ground)))
    assert (light + 0.05) / (dark + 0.05) >= 4.5
