"""Numbers as people read them: thousands separated, a real minus sign, no more digits than they carry."""

from __future__ import annotations

import math

MISSING = "–"
"""Shown where there is no number."""


def number(value: float | None, decimals: int = 0) -> str:
    """A number with a fixed count of decimals.

    >>> number(1234567.4), number(-0.04, 1), number(-2.5, 1), number(None)
    ('1,234,567', '0.0', '−2.5', '–')
    """
    if value is None or value != value:
        return MISSING
    rounded = round(value, decimals) + 0.0
    return f"{rounded:,.{decimals}f}".replace("-", "−")


def digits(value: float, significant: int = 3) -> str:
    """A number with at least so many significant digits, its whole part never rounded.

    >>> digits(0.012345), digits(9.5132), digits(25200.0), digits(0.0)
    ('0.0123', '9.51', '25,200', '0')
    """
    if value == 0.0:
        return "0"
    return number(value, max(0, significant - 1 - math.floor(math.log10(abs(value)))))


def plain(value: float, significant: int = 6) -> str:
    """An input as it was stated: no trailing zeros, its whole part never rounded.

    >>> plain(46.0), plain(0.0175), plain(172000.0), plain(61.23456, 4), plain(4983.27, 4)
    ('46', '0.0175', '172,000', '61.23', '4,983')
    """
    text = digits(value, significant)
    return text.rstrip("0").rstrip(".") if "." in text else text


def short(value: float) -> str:
    """A number for running text: three significant digits, no trailing zeros.

    >>> short(7.5), short(11.83), short(0.3594), short(25200.0)
    ('7.5', '11.8', '0.359', '25,200')
    """
    return plain(value, 3)


def sentence(words: str) -> str:
    """Words as a sentence: first letter large, full stop at the end.

    >>> sentence("stopped after 30 s"), sentence("")
    ('Stopped after 30 s.', '')
    """
    words = words.strip()
    return words[:1].upper() + words[1:] + ("" if words.endswith((".", "!", "?")) or not words else ".")


def percent(share: float | None, decimals: int = 1) -> str:
    r"""A share as per cent.

    >>> percent(0.0561), percent(None)
    ('5.6\xa0%', '–')
    """
    return MISSING if share is None else f"{number(100.0 * share, decimals)}\u00a0%"


def signed_percent(share: float, decimals: int = 1) -> str:
    r"""A relative error as per cent with its sign.

    >>> signed_percent(0.0123), signed_percent(-0.2), signed_percent(0.0)
    ('+1.2\xa0%', '−20.0\xa0%', '0.0\xa0%')
    """
    text = percent(share, decimals)
    return f"+{text}" if round(100.0 * share, decimals) > 0.0 else text


def gap_words(gap: float | None) -> str:
    r"""A proven gap, never rounded down to nothing.

    >>> gap_words(0.00061), gap_words(0.000001), gap_words(0.0), gap_words(None)
    ('0.06\xa0%', 'below 0.01\xa0%', '0\xa0%', '–')
    """
    if gap is None:
        return MISSING
    if gap == 0.0:
        return "0\u00a0%"
    return "below 0.01\u00a0%" if gap < 1e-4 else percent(gap, 2)


def thousands(amount: float | None) -> str:
    """An amount of money in thousands, with one decimal below one hundred thousand.

    >>> thousands(8104000.0), thousands(43210.0), thousands(0.0), thousands(None)
    ('8,104', '43.2', '0', '–')
    """
    if amount is None or amount == 0.0:
        return MISSING if amount is None else "0"
    return number(amount / 1000.0, 0 if abs(amount) >= 1e5 else 1)


def years(value: float) -> str:
    r"""A time in years.

    >>> years(1.94)
    '1.9\xa0years'
    """
    return f"{number(value, 1)}\u00a0years"
