"""A published number, kept exactly as its source prints it."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal


@dataclass(frozen=True, slots=True)
class Printed:
    """A number as printed, with its unit and the place where it stands.

    >>> latent = Printed("2 256.5", "kJ/kg", "some table, row 3")
    >>> latent.value, latent.half_digit
    (2256.5, 0.05)
    >>> round(latent.half_digits_off(2256.54), 3)
    0.8
    >>> latent.check(2256.6)
    Traceback (most recent call last):
    AssertionError: some table, row 3: printed 2 256.5 kJ/kg, computed 2256.6, 2.0 half digits off
    """

    text: str
    """Digits as printed; spaces group thousands, e marks a power of ten."""
    unit: str
    place: str
    """Source, edition, table or equation, and row."""

    @property
    def value(self) -> float:
        """The number."""
        return float(self._decimal)

    @property
    def half_digit(self) -> float:
        """Half a unit of the last printed digit: the tolerance that the print itself implies."""
        exponent = self._decimal.as_tuple().exponent
        assert isinstance(exponent, int)
        return 0.5 * 10.0**exponent

    def half_digits_off(self, computed: float) -> float:
        """Distance of a computed value in units of ``half_digit``."""
        return abs(computed - self.value) / self.half_digit

    def check(self, computed: float) -> None:
        """Fail unless the computed value rounds to the printed one."""
        off = self.half_digits_off(computed)
        if not off <= 1.0 + 1.0e-6:
            raise AssertionError(
                f"{self.place}: printed {self.text} {self.unit}, "
                f"computed {computed:.12g}, {off:.1f} half digits off"
            )

    @property
    def _decimal(self) -> Decimal:
        return Decimal(self.text.replace(" ", ""))
