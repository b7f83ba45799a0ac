"""The three units of length the trade works in, exact to the definition.

A foot is never guessed: the international and the US survey foot differ by 2 parts
in a million, which is 4 feet in a state-plane coordinate of two million.
"""

from __future__ import annotations

from enum import StrEnum
from fractions import Fraction

_METRES = {
    "m": Fraction(1),
    "ft": Fraction(3048, 10000),
    "ftUS": Fraction(1200, 3937),
}
_WORDS = {
    "m": ("metre", "metres"),
    "ft": ("foot", "feet"),
    "ftUS": ("US survey foot", "US survey feet"),
}


class Unit(StrEnum):
    """Metre, international foot (0.3048 m) and US survey foot (1200/3937 m).

    Published in 85 FR 62698 (5 October 2020), which also retires the US survey foot.

    >>> Unit.FOOT.metres_per_unit, Unit("ftUS").plural
    (Fraction(381, 1250), 'US survey feet')
    """

    METRE = "m"
    FOOT = "ft"
    US_SURVEY_FOOT = "ftUS"

    @property
    def metres_per_unit(self) -> Fraction:
        """Metres in one unit, exactly."""
        return _METRES[self.value]

    @property
    def label(self) -> str:
        """The word for one, as the trade says it."""
        return _WORDS[self.value][0]

    @property
    def plural(self) -> str:
        """The word for several."""
        return _WORDS[self.value][1]

    @property
    def is_foot(self) -> bool:
        """Whether feet and inches can be written in it."""
        return self is not Unit.METRE
