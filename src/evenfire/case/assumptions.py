"""What a case did not state and the program therefore assumed, as notices for the report."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from evenfire.case.messages import with_unit
from evenfire.case.schema_section import Section, unit_of
from evenfire.errors import Notice


def assumption(place: str, key: str, value: str, reason: str) -> Notice:
    """The notice that one key was not stated, with the value taken for it and why.

    Examples
    --------
    >>> assumption("boiler 'Old'", "standing_loss_kw", "25.7 kW", "casing loss at this rating").text
    "boiler 'Old', standing_loss_kw: not stated, assumed 25.7 kW (casing loss at this rating)"
    """
    return Notice(
        code="C190", text=f"{place}, {key}: not stated, assumed {value} ({reason})", severity="assumed"
    )


def default_notices(sections: Iterable[tuple[str, Section]]) -> Iterator[Notice]:
    """A notice for every numeric key of the sections that was left at its default.

    Parameters
    ----------
    sections : Iterable[tuple[str, Section]]
        How the section is called in the notice, and the section.
    """
    for place, section in sections:
        for key, field in type(section).model_fields.items():
            value = getattr(section, key)
            if key not in section.model_fields_set and isinstance(value, int | float):
                yield assumption(place, key, with_unit(float(f"{value:.6g}"), unit_of(field)), "default")
