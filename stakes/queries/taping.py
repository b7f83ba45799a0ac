"""A length as read on a steel tape, brought to the true horizontal length."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal

from geometry.corrections import (
    Pulled,
    SteelTape,
    TapeCorrections,
    slope_to_level,
    tape_corrections,
)
from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.queries.expected import refused_by
from stakes.record.lengths import Measured

POUND_N = 4.4482216152605
"""Newtons in a pound-force, from its definition."""

TAPE = SteelTape()
"""A tape of usual steel, true at 20 °C (68 °F) and 50 N (11 lb) lying flat."""


@dataclass(frozen=True, slots=True)
class Taped:
    """What was noted beside a taped length; what is empty is not corrected for.

    In a job in feet `temperature` is Fahrenheit and `pull` pounds; in metres Celsius
    and newtons. `hung`: it was held at its ends only, so that it sagged. `rise` is the
    height difference of the ends.
    """

    temperature: Decimal | None = None
    pull: Decimal | None = None
    hung: bool = False
    rise: Measured | None = None


@dataclass(frozen=True, slots=True)
class Corrected:
    """The horizontal length, and each correction in words."""

    metres: float
    words: tuple[str, ...]


def corrected(read_m: float, taped: Taped, unit: Unit) -> Corrected:
    """The true horizontal length of what was read; Refused when it cannot be."""
    try:
        along = tape_corrections(read_m, TAPE, _pulled(read_m, taped, unit))
        true_m = read_m + along.total_m
        words = list(_along_words(taped, along, unit))
        if taped.rise is not None:
            level_m = slope_to_level(true_m, taped.rise.metres)
            words.append(_words("slope", level_m - true_m, unit))
            true_m = level_m
    except GeometryError as error:
        raise refused_by(error, _field(taped)) from error
    return Corrected(true_m, tuple(words))


def _pulled(read_m: float, taped: Taped, unit: Unit) -> Pulled:
    used = Pulled(span_m=read_m if taped.hung else 0.0)
    celsius, newtons = used.temperature_c, used.tension_n
    if taped.temperature is not None:
        said = float(taped.temperature)
        celsius = (said - 32) / 1.8 if unit.is_foot else said
    if taped.pull is not None:
        newtons = float(taped.pull) * (POUND_N if unit.is_foot else 1.0)
    return Pulled(temperature_c=celsius, tension_n=newtons, span_m=used.span_m)


def _along_words(taped: Taped, along: TapeCorrections, unit: Unit) -> Iterator[str]:
    degrees, force = ("°F", "lb") if unit.is_foot else ("°C", "N")
    if taped.temperature is not None:
        name = f"temperature {taped.temperature} {degrees}"
        yield _words(name, along.temperature_m, unit)
    if taped.pull is not None:
        name = f"pull {taped.pull} {force}"
        yield _words(name, along.pull_m, unit)
    if taped.hung:
        yield _words("sag", along.sag_m, unit)


def _field(taped: Taped) -> str:
    return "rise" if taped.rise is not None else "pull"


def _words(name: str, metres: float, unit: Unit) -> str:
    text = Length.from_metres(metres, unit, 4 if unit.is_foot else 5).text
    return f"{name} {text if text.startswith('-') else '+' + text} {unit}"
