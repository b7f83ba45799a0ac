"""Areas, and the chains, rods and links of old deeds, exact to the foot used."""

from __future__ import annotations

import math
from enum import StrEnum
from fractions import Fraction

from geometry.errors import NotFinite, OutOfRange
from geometry.units.length import NANOMETRES, Length, Unit
from geometry.units.rounding import as_decimal, checked_decimals, half_away

_CHAIN_FT, _ROD_FT, _ACRE_FT2 = Fraction(66), Fraction(33, 2), 43560


class AreaUnit(StrEnum):
    """Units of area; the acre is 43 560 square feet of either foot.

    Published in NIST SP 811 (from memory).

    >>> float(AreaUnit.ACRE_US.square_metres)
    4046.872609874252
    """

    SQUARE_METRE = "m2"
    HECTARE = "ha"
    SQUARE_FOOT = "ft2"
    SQUARE_FOOT_US = "ftUS2"
    ACRE = "ac"
    ACRE_US = "acUS"

    @property
    def square_metres(self) -> Fraction:
        """Square metres in one unit, exactly."""
        return _SQUARE_METRES[self]


_FT2 = Unit.FOOT.metres_per_unit**2
_FTUS2 = Unit.US_SURVEY_FOOT.metres_per_unit**2
_SQUARE_METRES = {
    AreaUnit.SQUARE_METRE: Fraction(1),
    AreaUnit.HECTARE: Fraction(10_000),
    AreaUnit.SQUARE_FOOT: _FT2,
    AreaUnit.SQUARE_FOOT_US: _FTUS2,
    AreaUnit.ACRE: _ACRE_FT2 * _FT2,
    AreaUnit.ACRE_US: _ACRE_FT2 * _FTUS2,
}


def area_text(area_m2: float, unit: AreaUnit, decimals: int) -> str:
    """A computed area in `unit`, rounded once, halves away from zero.

    Raises NotFinite, and OutOfRange for decimals outside 0 to 9.

    >>> area_text(4046.8564224, AreaUnit.ACRE, 3)
    '1.000'
    """
    if not math.isfinite(area_m2):
        raise NotFinite("An area must be a finite number of square metres.")
    scale = 10 ** checked_decimals(decimals)
    count = half_away(Fraction(area_m2) / unit.square_metres * scale)
    return as_decimal(count, decimals)


def chains(
    foot: Unit, chains: int = 0, rods: int = 0, links: Fraction | int = 0
) -> Length:
    """The length of chains (66 ft), rods (16.5 ft) and links (0.66 ft) in `foot`.

    Published in NIST Handbook 44 App. C (from memory). Raises OutOfRange for metres:
    a deed's chain rests on one of the two feet.

    >>> chains(Unit.US_SURVEY_FOOT, chains=12, links=34).text
    '814.44'
    """
    if not foot.is_foot:
        raise OutOfRange("A chain is 66 feet: say of which foot.")
    feet = chains * _CHAIN_FT + rods * _ROD_FT + links * _CHAIN_FT / 100
    nanometres = round(feet * foot.metres_per_unit * NANOMETRES)
    text = as_decimal(half_away(feet * 10**9), 9).rstrip("0").rstrip(".")
    return Length(text, foot, nanometres)
