"""Reads a page the way a browser's parser does, to see what a reader would see."""

from __future__ import annotations

from html.parser import HTMLParser

VOID = {"meta", "br", "link", "img", "input", "hr"}


class PageReader(HTMLParser):
    """Elements with their attributes, visible words, and cells of tables."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.words: list[str] = []
        self.rows: list[list[str]] = []
        self.unbalanced: list[str] = []
        self._open: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))
        if tag == "tr":
            self.rows.append([])
        if tag in ("td", "th"):
            self.rows[-1].append("")
        if tag not in VOID:
            self._open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        if not self._open or self._open.pop() != tag:
            self.unbalanced.append(tag)

    def handle_data(self, data: str) -> None:
        if "style" in self._open:
            return
        self.words.append(data)
        if self.rows and ("td" in self._open or "th" in self._open):
            self.rows[-1][-1] += data.strip()

    @property
    def text(self) -> str:
        return " ".join(" ".join(self.words).split())

    def row(self, first_cell: str) -> list[str]:
        """The first row of any table that begins with these words."""
        return next(row for row in self.rows if row and row[0].replace("\u00a0", " ") == first_cell)

    def count(self, tag: str) -> int:
        return sum(1 for found, _ in self.elements if found == tag)


def read_page(text: str) -> PageReader:
    """A page, read to its end."""
    reader = PageReader()
    reader.feed(text)
    reader.close()
    reader.unbalanced += reader._open
    return reader
