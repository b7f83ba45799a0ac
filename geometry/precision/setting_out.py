"""The numbers to set a point out: angle right, distance, cut or fill.

Only + - * / sqrt and atan2 on prepared numbers, so that a phone without a signal shows
the same digits.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

from numpy.typing import ArrayLike

from geometry import checked
from geometry.decide import shown
from geometry.precision.rays import span

TURN = 2 * math.pi


@dataclass(frozen=True, slots=True)
class SettingOut:
    """Radians in [0, 2 pi), clockwise; horizontal distances in metres.

    `angle_right_rad` is turned clockwise from the backsight to the target.
    """

    azimuth_rad: float
    backsight_azimuth_rad: float
    angle_right_rad: float
    distance_m: float
    backsight_m: float


class Grade(StrEnum):
    """What to do at the stake to reach the design elevation."""

    CUT = "cut"
    FILL = "fill"
    ON_GRADE = "on grade"


@dataclass(frozen=True, slots=True)
class CutFill:
    """`amount` is stake less design, positive for a cut, not rounded; same unit."""

    grade: Grade
    amount: float


def azimuth(start: ArrayLike, end: ArrayLike) -> float:
    """Azimuth from `start` to `end` (E, N), radians in [0, 2 pi), clockwise from north.

    Raises CoincidentPoints, WrongShape, NotFinite.

    >>> round(math.degrees(azimuth((0, 0), (-1, 0))), 9)
    270.0
    """
    vector, _ = span(
        "the two points", checked.point("start", start), checked.point("end", end)
    )
    angle = math.atan2(float(vector[0]), float(vector[1]))
    return angle + TURN if angle < 0 else angle


def setting_out(
    station: ArrayLike, backsight: ArrayLike, target: ArrayLike
) -> SettingOut:
    """Angle right from the backsight and horizontal distance to `target`.

    Points (E, N) in metres. Raises CoincidentPoints, WrongShape, NotFinite.

    >>> s = setting_out((0, 0), (0, 100), (30, 40))
    >>> round(math.degrees(s.angle_right_rad), 4), s.distance_m
    (36.8699, 50.0)
    """
    s = checked.point("station", station)
    to_target, to_back = azimuth(s, target), azimuth(s, backsight)
    angle = to_target - to_back
    east, north = (float(x) for x in checked.point("target", target) - s)
    back = checked.point("backsight", backsight) - s
    return SettingOut(
        azimuth_rad=to_target,
        backsight_azimuth_rad=to_back,
        angle_right_rad=angle + TURN if angle < 0 else angle,
        distance_m=math.sqrt(east * east + north * north),
        backsight_m=math.sqrt(float(back[0]) ** 2 + float(back[1]) ** 2),
    )


def cut_fill(stake_elevation: float, design_elevation: float) -> CutFill:
    """Cut when the stake is above design, fill when below; any one unit of length.

    >>> cut_fill(101.25, 100.00)
    CutFill(grade=<Grade.CUT: 'cut'>, amount=1.25)
    """
    amount = checked.number("stake elevation", stake_elevation) - checked.number(
        "design elevation", design_elevation
    )
    if amount > 0:
        return CutFill(Grade.CUT, amount)
    return CutFill(Grade.FILL if amount < 0 else Grade.ON_GRADE, amount)


def shown_cut_fill(amount: float, places: int) -> tuple[Grade, str]:
    """The word and the digits: computed unrounded, rounded once for the label.

    >>> shown_cut_fill(-0.304, 2), shown_cut_fill(0.004, 2)
    ((<Grade.FILL: 'fill'>, '0.30'), (<Grade.ON_GRADE: 'on grade'>, '0.00'))
    """
    digits = shown(abs(amount), places)
    if float(digits) == 0:
        return Grade.ON_GRADE, digits
    return (Grade.CUT if amount > 0 else Grade.FILL), digits
