"""Do the dimensions on a sheet close? Overall against the sum of its parts.

A string that does not close is a question for the designer, never something to spread
over its parts (common practice).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from geometry.errors import EmptyInput
from geometry.units import Length


@dataclass(frozen=True, slots=True)
class Closed:
    """Whether a string of dimensions adds up to its overall, exactly as printed."""

    closes: bool
    difference: Length
    sentence: str


def close_dimensions(
    name: str, parts: Sequence[Length], overall: Length, *, slack: Length | None = None
) -> Closed:
    """Compare the overall dimension of a string with the sum of its parts.

    Lengths are exact, so a string closes or does not; `slack` allows for rounding on
    the sheet (a 1/8 in sheet may be out by 1/16 in a part).

    Raises EmptyInput when the string has no parts.

    >>> from geometry.units import Unit
    >>> parts = [Length.parse(t, Unit.FOOT) for t in ("24", "12.5", "13.5")]
    >>> close_dimensions("line 1", parts, Length.parse("50.5", Unit.FOOT)).sentence
    'line 1: the parts add up to 50 ft, 0.5 ft less than the overall of 50.5 ft.'
    """
    if not parts:
        raise EmptyInput(f"{name} has no parts.", do="Give each dimension of it.")
    total = parts[0]
    for part in parts[1:]:
        total = total.plus(part)
    difference = total.minus(overall)
    allowed = abs(slack.nanometres) if slack else 0
    closes = abs(difference.nanometres) <= allowed
    return Closed(
        closes, difference, _sentence(name, total, overall, difference, closes)
    )


def conflicts(
    strings: dict[str, tuple[Sequence[Length], Length]],
) -> tuple[Closed, ...]:
    """The strings that do not close, of several by name."""
    found = (
        close_dimensions(name, parts, overall)
        for name, (parts, overall) in strings.items()
    )
    return tuple(one for one in found if not one.closes)


def _sentence(
    name: str, total: Length, overall: Length, difference: Length, closes: bool
) -> str:
    unit = overall.unit
    if closes:
        return f"{name}: the parts add up to the overall of {_text(overall)}."
    apart = difference.nanometres
    size = Length.from_nanometres(abs(apart), unit, 4)
    more = "more" if apart > 0 else "less"
    sum_ = Length.from_nanometres(total.nanometres, unit, 4)
    return (
        f"{name}: the parts add up to {_text(sum_)}, {_text(size)} {more} than the "
        f"overall of {_text(Length.from_nanometres(overall.nanometres, unit, 4))}."
    )


def _text(length: Length) -> str:
    shown = length.shown(length.unit, 4)
    if "." in shown:
        shown = shown.rstrip("0").rstrip(".")
    return f"{shown} {length.unit}"
