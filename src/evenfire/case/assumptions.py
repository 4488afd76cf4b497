"""What a case did not state and the program therefore assumed, as notices for the report."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field

from evenfire.case.messages import with_unit
from evenfire.case.schema_section import Section, unit_of
from evenfire.errors import Notice


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumed:
    """A value that a case did not state, in the unit of its key."""

    key: str
    value: float
    unit: str
    reason: str

    @property
    def shown(self) -> str:
        """The value with its unit, to four digits."""
        return f"{self.value:.4g} {self.unit}"


@dataclass(slots=True)
class AssumedValues:
    """Gathers what is assumed while one boiler is converted."""

    values: list[Assumed] = field(default_factory=list)

    def stated_or(self, key: str, stated: float | None, otherwise: float, unit: str, reason: str) -> float:
        """The stated value, or the other one, which is then noted as assumed for this reason."""
        if stated is not None:
            return stated
        self.values.append(Assumed(key=key, value=otherwise, unit=unit, reason=reason))
        return otherwise


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
        for key, described in type(section).model_fields.items():
            value = getattr(section, key)
            if key not in section.model_fields_set and isinstance(value, int | float):
                yield assumption(place, key, with_unit(float(value), unit_of(described)), "default")
