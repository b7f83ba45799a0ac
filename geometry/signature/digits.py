"""Slips in copied numbers: two digits exchanged, or one digit read for another."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from geometry.errors import NotReadable


@dataclass(frozen=True, slots=True)
class DigitSlip:
    """A number as it may have been copied, and how that differs from the true one."""

    text: str
    difference: float
    exchanged: bool


def slips(text: str) -> tuple[DigitSlip, ...]:
    """All copies of a number with two neighbouring digits exchanged, or one changed.

    >>> [s.text for s in slips("12.3") if s.exchanged]
    ['21.3', '13.2']

    Raises NotReadable when the text is not a plain decimal number.
    """
    true = _number(text)
    places = [i for i, c in enumerate(text) if c.isdigit()]
    found = [
        DigitSlip(copy, _number(copy) - true, True)
        for copy in _exchanged(text, places)
        if copy != text
    ]
    found += [
        DigitSlip(copy, _number(copy) - true, False)
        for i in places
        for copy in (text[:i] + d + text[i + 1 :] for d in "0123456789")
        if copy != text
    ]
    return tuple(found)


def divisible_by_nine(difference: float, decimals: int) -> bool:
    """Whether a difference could come from exchanged digits: it divides by nine.

    A hint only; one difference in nine does so by chance. Common practice.

    >>> divisible_by_nine(0.27, 2), divisible_by_nine(0.25, 2)
    (True, False)
    """
    whole = round(abs(difference) * 10.0**decimals)
    return whole > 0 and whole % 9 == 0


def _exchanged(text: str, places: list[int]) -> list[str]:
    copies = []
    for i, j in pairwise(places):
        letters = list(text)
        letters[i], letters[j] = letters[j], letters[i]
        copies.append("".join(letters))
    return copies


def _number(text: str) -> float:
    digits = text.strip().lstrip("+-").replace(".", "", 1)
    if not digits.isascii() or not digits.isdigit():
        raise NotReadable(
            "The number is not a plain decimal number.",
            where=f"It reads {text!r}.",
            do="Give it as it was typed, such as 5123.46.",
        )
    return float(text)
