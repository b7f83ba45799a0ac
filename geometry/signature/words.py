"""How numbers are said to a party chief: in the job's unit, short, with a direction."""

from __future__ import annotations

import math
from dataclasses import dataclass

_POINTS = ("north", "northeast", "east", "southeast")
_POINTS_ON = ("south", "southwest", "west", "northwest")


@dataclass(frozen=True, slots=True)
class Words:
    """The unit sentences are written in; `fine` names a smaller one, if there is."""

    unit: str
    metres_per_unit: float
    decimals: int
    fine: str = ""
    fine_per_unit: float = 1.0

    def length(self, metres: float) -> str:
        """A length without sign.

        >>> METRES.length(-0.0312), METRES.length(12.5), FEET.length(0.031)
        ('31 mm', '12.500 m', '0.10 ft')
        """
        value = abs(metres) / self.metres_per_unit
        if self.fine and value < 1.0:
            return f"{value * self.fine_per_unit:.0f} {self.fine}"
        return f"{value:.{self.decimals}f} {self.unit}"

    def far(self, metres: float) -> str:
        """A distance to walk, in whole units.

        >>> METRES.far(41.7)
        '42 m'
        """
        return f"{abs(metres) / self.metres_per_unit:.0f} {self.unit}"


METRES = Words("m", 1.0, 3, "mm", 1000.0)
FEET = Words("ft", 0.3048, 2)
US_SURVEY_FEET = Words("ft", 1200 / 3937, 2)


def angle(radians: float) -> str:
    """An angle without sign: seconds when small, else degrees and minutes.

    >>> print(angle(math.radians(150 / 3600)), angle(-0.5), angle(0.004))
    150" 28°39' 0°14'
    """
    seconds = abs(math.degrees(radians)) * 3600
    if seconds < 600:
        return f'{seconds:.0f}"'
    minutes = round(seconds / 60)
    return f"{minutes // 60}°{minutes % 60:02d}'"


def hand(radians: float) -> str:
    """Clockwise (positive) or counterclockwise.

    >>> hand(-0.1)
    'counterclockwise'
    """
    return "clockwise" if radians >= 0 else "counterclockwise"


def towards(east: float, north: float) -> str:
    """The nearest of eight directions.

    >>> towards(1.0, 0.1), towards(-1.0, -1.0)
    ('east', 'southwest')
    """
    eighth = round(math.atan2(east, north) / (math.pi / 4)) % 8
    return (_POINTS + _POINTS_ON)[eighth]


def stakes(count: int) -> str:
    """A number of stakes in words of its own number.

    >>> stakes(1), stakes(4)
    ('1 stake', '4 stakes')
    """
    return "1 stake" if count == 1 else f"{count} stakes"
