"""A table of the page: text only, already formatted."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """Rows under one heading; the heading may be empty."""

    title: str = ""
    rows: tuple[tuple[str, ...], ...]
    """The first cell of a row names it."""
    total: bool = False
    """Whether the rows are sums of those above."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """Rows and columns of text; a line feed inside a cell is shown as one."""

    caption: str
    head: tuple[str, ...]
    groups: tuple[Group, ...]
    word_columns: tuple[int, ...] = ()
    """Columns that hold words and stand on the left; numbers stand on the right."""
    marked_column: int | None = None
    """Column to set off, e.g. the best alternative's."""


def plain_table(
    caption: str,
    head: tuple[str, ...],
    rows: tuple[tuple[str, ...], ...],
    word_columns: tuple[int, ...] = (),
) -> Table:
    """A table without groups."""
    return Table(caption=caption, head=head, groups=(Group(rows=rows),), word_columns=word_columns)
