"""A length as somebody wrote it, with the whole nanometres it stands for.

The text and its unit are kept because they are what was on the sheet; the nanometres
are what lengths are compared by, because they survive every unit exactly enough: two
texts that mean the same place give the same integer. Floats are derived for computing
and never turned back silently.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from fractions import Fraction

from geometry.errors import NotFinite, OutOfRange
from geometry.units.reading import read_length
from geometry.units.rounding import (
    MOST_DECIMALS,
    as_decimal,
    checked_decimals,
    half_away,
    nearest,
)
from geometry.units.unit import Unit

__all__ = ["Length", "Unit"]

NANOMETRES = 10**9
LARGEST_NM = 10**17
"""100,000 km: beyond any coordinate on Earth, and inside 64 bits."""

_TIES_KEPT = 7
"""Up to this decimal a foot's last place is wider than the nanometre kept."""


@dataclass(frozen=True, slots=True, order=True)
class Length:
    """A length: `text` as entered, its `unit`, and whole `nanometres`.

    Lengths are equal, and ordered, by their nanometres alone.

    >>> sill = Length.parse('''12'-7 5/16"''', Unit.FOOT)
    >>> sill.nanometres, sill.metres, sill.shown(Unit.METRE, 3)
    (3843337500, 3.8433375, '3.843')
    """

    text: str = field(compare=False)
    unit: Unit = field(compare=False)
    nanometres: int

    @classmethod
    def parse(cls, text: str, unit: Unit, *, decimal_comma: bool = False) -> Length:
        """Read `text`; without a suffix m, ft or ftUS it is in `unit`.

        Raises NotReadable, saying what is wrong and what to type, and OutOfRange
        beyond 100,000 km.

        >>> Length.parse("-0.5", Unit.METRE).nanometres
        -500000000
        >>> Length.parse("12.34 ftUS", Unit.METRE).unit
        <Unit.US_SURVEY_FOOT: 'ftUS'>
        """
        value, found = read_length(text, unit, decimal_comma)
        return cls(text.strip(), found, _nanometres(value, found))

    @classmethod
    def from_nanometres(cls, nanometres: int, unit: Unit, decimals: int) -> Length:
        """Exactly `nanometres`, with the text it has in `unit` at `decimals`."""
        _within(nanometres)
        return cls(_shown(nanometres, unit, decimals), unit, nanometres)

    @classmethod
    def from_metres(cls, metres: float, unit: Unit, decimals: int) -> Length:
        """A computed value rounded to `decimals` of `unit`; its text says all of it.

        >>> Length.from_metres(1.0, Unit.FOOT, 3)
        Length(text='3.281', unit=<Unit.FOOT: 'ft'>, nanometres=1000048800)
        """
        if not math.isfinite(metres):
            raise NotFinite("A length must be a finite number of metres.")
        scale = 10 ** checked_decimals(decimals)
        count = half_away(Fraction(metres) / unit.metres_per_unit * scale)
        nanometres = _nanometres(Fraction(count, scale), unit)
        return cls(as_decimal(count, decimals), unit, nanometres)

    @property
    def metres(self) -> float:
        """Metres as the nearest float, for computing."""
        return self.nanometres / NANOMETRES

    def in_unit(self, unit: Unit) -> Fraction:
        """The length in `unit`, exactly."""
        return _in_unit(self.nanometres, unit)

    def shown(self, unit: Unit, decimals: int) -> str:
        """Text in `unit`, rounded once from the exact value, halves away from zero.

        A value within the nanometre of a half counts as that half, so that 12.345
        entered in US survey feet shows as 12.35 and not by the luck of its storage.

        >>> Length.parse("12.345", Unit.US_SURVEY_FOOT).shown(Unit.US_SURVEY_FOOT, 2)
        '12.35'
        """
        return _shown(self.nanometres, unit, decimals)

    def plus(self, other: Length) -> Length:
        """The sum in whole nanometres, in this length's unit.

        >>> Length.parse("1.5", Unit.METRE).plus(Length.parse("1'", Unit.FOOT)).text
        '1.8048'
        """
        return _written(self.nanometres + other.nanometres, self.unit)

    def minus(self, other: Length) -> Length:
        """The difference in whole nanometres, in this length's unit."""
        return _written(self.nanometres - other.nanometres, self.unit)


def _in_unit(nanometres: int, unit: Unit) -> Fraction:
    return Fraction(nanometres, NANOMETRES) / unit.metres_per_unit


def _nanometres(value: Fraction, unit: Unit) -> int:
    return _within(round(value * unit.metres_per_unit * NANOMETRES))


def _within(nanometres: int) -> int:
    if abs(nanometres) > LARGEST_NM:
        raise OutOfRange(
            "The length is larger than any on Earth.", do="Check its digits and unit."
        )
    return nanometres


def _shown(nanometres: int, unit: Unit, decimals: int) -> str:
    scale = 10 ** checked_decimals(decimals)
    half_a_nanometre = _in_unit(1, unit) * scale / 2
    noise = half_a_nanometre if decimals <= _TIES_KEPT else Fraction(0)
    return as_decimal(nearest(_in_unit(nanometres, unit) * scale, noise), decimals)


def _written(nanometres: int, unit: Unit) -> Length:
    """The shortest text in `unit` that reads back as these nanometres."""
    _within(nanometres)
    for decimals in range(MOST_DECIMALS + 1):
        text = _shown(nanometres, unit, decimals)
        if _nanometres(Fraction(text), unit) == nanometres:
            break
    return Length(text, unit, nanometres)
