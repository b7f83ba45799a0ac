"""A length as read on a tape, brought to the true horizontal length."""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry.units import Length, Unit
from stakes.record import Refused
from stakes.record.lengths import Measured


@dataclass(frozen=True, slots=True)
class Taped:
    """What was noted beside a taped length; what is empty is not corrected for.

    `rise` is the height difference of the ends.
    """

    rise: Measured | None = None


@dataclass(frozen=True, slots=True)
class Corrected:
    """The horizontal length, and each correction in words."""

    metres: float
    words: tuple[str, ...]


def corrected(read_m: float, taped: Taped, unit: Unit) -> Corrected:
    """The true horizontal length of what was read."""
    length, words = read_m, []
    if taped.rise is not None:
        rise = taped.rise.metres
        if abs(rise) >= abs(length):
            raise Refused(
                "The ends would differ more in height than they lie apart.",
                do="Check both numbers.",
                field="rise",
            )
        flat = math.sqrt(length * length - rise * rise)
        words.append(_words("slope", flat - length, unit))
        length = flat
    return Corrected(length, tuple(words))


def _words(name: str, metres: float, unit: Unit) -> str:
    text = Length.from_metres(metres, unit, 4).text
    return f"{name} {text if text.startswith('-') else '+' + text} {unit}"
