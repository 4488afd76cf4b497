"""How figures look, and how one becomes an SVG that can stand beside others in one page."""

from __future__ import annotations

import io
import re
import warnings
import xml.etree.ElementTree as ET
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from matplotlib import rc_context
from matplotlib.axes import Axes
from matplotlib.figure import Figure

BLACK, ORANGE, SKY, GREEN = "#000000", "#E69F00", "#56B4E9", "#009E73"
YELLOW, BLUE, VERMILION, PURPLE = "#F0E442", "#0072B2", "#D55E00", "#CC79A7"
"""The palette of Okabe and Ito, told apart with any common colour vision."""
INK, FAINT, GRID = "#1c2b33", "#5b6b73", "#d5dcd8"

FILLS: tuple[tuple[str, str, str], ...] = (
    (BLUE, "", "#ffffff"),
    (SKY, "///", "#ffffff"),
    (ORANGE, "", "#ffffff"),
    (YELLOW, "|||", "#8a8420"),
    (PURPLE, "\\\\\\", "#ffffff"),
    ("#8d999d", "", "#ffffff"),
    ("#dfe3e0", "---", FAINT),
    ("#7d5a3c", "||", "#ffffff"),
    ("#f2c9a1", "\\\\", FAINT),
    ("#1f3a4d", "xxx", "#ffffff"),
)
"""Colour, hatch and colour of the hatch of one thing after another; grey print tells them apart too."""
FROM_VESSEL = (GREEN, "\\\\\\\\", "#ffffff")
NOT_MET = (VERMILION, "xxxx", "#ffffff")
MARKERS = (
    (BLACK, "o"),
    (BLUE, "s"),
    (VERMILION, "^"),
    (GREEN, "D"),
    (PURPLE, "v"),
    (ORANGE, "P"),
    (SKY, "X"),
)
"""Colour and marker of one alternative after another."""

WIDTH_INCHES = 7.6
LONGEST_LABEL = 24
SVG = "http://www.w3.org/2000/svg"
XLINK = "http://www.w3.org/1999/xlink"
NOT_IN_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
SHORTENED = re.compile(r"(\.\d\d)\d+")
"""Cuts coordinates after a hundredth of a point."""
STYLE: dict[str, Any] = {
    "svg.fonttype": "none",
    "text.parse_math": False,
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans"],
    "font.size": 9.0,
    "figure.facecolor": "none",
    "savefig.facecolor": "none",
    "axes.facecolor": "none",
    "axes.edgecolor": FAINT,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.7,
    "axes.axisbelow": True,
    "axes.grid": True,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.titlesize": 9.5,
    "axes.titlelocation": "left",
    "grid.color": GRID,
    "grid.linewidth": 0.6,
    "hatch.linewidth": 0.6,
    "legend.frameon": False,
    "legend.fontsize": 8.5,
    "text.color": INK,
    "xtick.color": FAINT,
    "ytick.color": FAINT,
    "xtick.labelcolor": INK,
    "ytick.labelcolor": INK,
    "date.converter": "concise",
    "figure.constrained_layout.use": True,
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawing:
    """A figure as the page shows it."""

    title: str
    """What it shows, one line; also its short text for screen readers."""
    description: str
    """What a reader who cannot see it should know."""
    svg: str
    """One ``svg`` element whose ids no other drawing of the page uses."""


def drawing(
    key: str,
    title: str,
    description: str,
    heights_inches: Sequence[float],
    draw: Callable[[Sequence[Axes]], None],
    width_inches: float = WIDTH_INCHES,
) -> Drawing:
    """A figure of panels one above the other, sharing their horizontal axis.

    Parameters
    ----------
    key
        Unique in the page; every id of the drawing starts with it.
    title, description
        Alternative text.
    heights_inches
        Height of every panel, from the top [inch].
    draw
        Puts everything into the panels.
    width_inches
        Width [inch]; text keeps its size, so a narrow figure reads well beside a table.
    """
    style: Any = STYLE | {"svg.hashsalt": key}
    with rc_context(style), warnings.catch_warnings():
        warnings.filterwarnings("ignore", message=r"Glyph .* missing from font")
        figure = Figure(figsize=(width_inches, sum(heights_inches)))
        panels = figure.subplots(
            len(heights_inches), 1, sharex=True, squeeze=False, height_ratios=list(heights_inches)
        )[:, 0]
        draw(list(panels))
        raw = io.BytesIO()
        nothing = {"Date": None, "Creator": None, "Format": None, "Type": None}
        figure.savefig(raw, format="svg", metadata=nothing)
    return Drawing(title=title, description=description, svg=_inline(raw.getvalue(), key, title, description))


def label(words: str) -> str:
    """User text as a label of a figure: on one line, cut to a length that leaves room for the figure."""
    line = " ".join(shown(words).split())
    if line.startswith("_"):
        line = f"\u200b{line}"  # a legend leaves out what starts with an underscore
    return line if len(line) <= LONGEST_LABEL else f"{line[: LONGEST_LABEL - 1].rstrip()}…"


def shown(words: str) -> str:
    """User text as a figure can carry it: characters that no XML may hold are replaced."""
    return NOT_IN_XML.sub("\ufffd", words)


def _inline(raw: bytes, key: str, title: str, description: str) -> str:
    """The SVG without prologue and fixed size, with alternative text and ids of its own."""
    ET.register_namespace("", SVG)
    ET.register_namespace("xlink", XLINK)
    root = ET.fromstring(raw)
    for size in ("width", "height"):
        root.attrib.pop(size)
    for metadata in root.findall(f"{{{SVG}}}metadata"):
        root.remove(metadata)
    used = set(re.findall(rb"(?:url\(#|href=\"#)([^)\"]+)", raw))
    for element in root.iter():
        for attribute, value in element.attrib.items():
            element.set(attribute, value.replace("url(#", f"url(#{key}-"))
        if "d" in element.attrib:
            element.set("d", SHORTENED.sub(r"\1", " ".join(element.attrib["d"].split())))
        if f"{{{XLINK}}}href" in element.attrib:
            target = element.attrib.pop(f"{{{XLINK}}}href")
            element.set("href", f"#{key}-{target.removeprefix('#')}")
        name = element.attrib.pop("id", None)
        if name is not None and name.encode() in used:
            element.set("id", f"{key}-{name}")
    root.set("role", "img")
    root.set("aria-labelledby", f"{key}-title {key}-description")
    for place, (tag, words) in enumerate((("title", title), ("desc", description))):
        element = ET.Element(
            f"{{{SVG}}}{tag}", {"id": f"{key}-{'title' if tag == 'title' else 'description'}"}
        )
        element.text = shown(words)
        root.insert(place, element)
    return ET.tostring(root, encoding="unicode")
