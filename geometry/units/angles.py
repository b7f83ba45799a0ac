"""Angles, azimuths and bearings printed for people: degrees, gon, quadrants.

Seconds are counted as whole units of the last decimal before they are split, so that
59.9996 seconds carries into the minute and 359°59'59.9996" into zero.
"""

from __future__ import annotations

import math
from enum import StrEnum
from fractions import Fraction

from geometry.errors import OutOfRange
from geometry.units.rounding import as_decimal, checked_decimals, nearest
from geometry.units.turns import SECONDS_PER_RADIAN, full_turn, half_turn

SECONDS_PER_TURN = 1_296_000
_NOISE_SECONDS = Fraction(1, 10**9)
"""What a float of a full turn cannot tell, several times over."""


class AngleUnit(StrEnum):
    """How a job writes angles."""

    DMS = "dms"
    DEGREES = "deg"
    GON = "gon"

    @property
    def per_turn(self) -> int:
        """Units in a full turn."""
        return 400 if self is AngleUnit.GON else 360


def angle_text(
    angle_rad: float, unit: AngleUnit = AngleUnit.DMS, decimals: int = 0
) -> str:
    """A signed angle as it stands, not brought into one turn.

    Halves go away from zero. `decimals` (0-9) are of seconds, degrees or gon. The
    sign of minus half a degree is kept; zero has none. Raises NotFinite, OutOfRange.

    >>> angle_text(math.radians(-0.5)), angle_text(math.radians(29 + 59.9999 / 60))
    ('-0°30\\'00"', '30°00\\'00"')
    >>> angle_text(math.pi / 2, AngleUnit.GON, 4)
    '100.0000 gon'
    """
    return _text(_count(angle_rad, unit, decimals), unit, decimals)


def azimuth_text(
    azimuth_rad: float, unit: AngleUnit = AngleUnit.DMS, decimals: int = 0
) -> str:
    """A direction from north, clockwise, from 0 up to but not including a full turn.

    >>> azimuth_text(math.radians(359.99999)), azimuth_text(-math.pi / 2)
    ('0°00\\'00"', '270°00\\'00"')
    """
    return _text(_azimuth_count(azimuth_rad, unit, decimals), unit, decimals)


def bearing_text(
    azimuth_rad: float, unit: AngleUnit = AngleUnit.DMS, decimals: int = 0
) -> str:
    """A direction as quadrant and angle from the meridian.

    >>> bearing_text(math.radians(150.5)), bearing_text(math.radians(270))
    ('S 29°30\\'00" E', 'N 90°00\\'00" W')
    """
    count = _azimuth_count(azimuth_rad, unit, decimals)
    quarter = _units_per_turn(unit, decimals) // 4
    if count <= quarter:
        return f"N {_text(count, unit, decimals)} E"
    if count < 2 * quarter:
        return f"S {_text(2 * quarter - count, unit, decimals)} E"
    if count < 3 * quarter:
        return f"S {_text(count - 2 * quarter, unit, decimals)} W"
    return f"N {_text(4 * quarter - count, unit, decimals)} W"


def turn_text(
    angle_rad: float, unit: AngleUnit = AngleUnit.DMS, decimals: int = 0
) -> str:
    """A turn or deflection with its side, R clockwise and L counter-clockwise.

    >>> turn_text(math.radians(-12.25)), turn_text(math.radians(340))
    ('12°15\\'00" L', '20°00\\'00" L')
    """
    count = _count(half_turn(angle_rad), unit, decimals)
    side = " R" if count > 0 else " L" if count < 0 else ""
    return _text(abs(count), unit, decimals) + side


def _units_per_turn(unit: AngleUnit, decimals: int) -> int:
    whole = SECONDS_PER_TURN if unit is AngleUnit.DMS else unit.per_turn
    scale: int = 10 ** checked_decimals(decimals)
    return whole * scale


def _count(angle_rad: float, unit: AngleUnit, decimals: int) -> int:
    if not math.isfinite(angle_rad) or abs(angle_rad) > 1e4:
        raise OutOfRange("An angle to print must be a few turns at most.")
    per_second = Fraction(_units_per_turn(unit, decimals), SECONDS_PER_TURN)
    value = Fraction(angle_rad * SECONDS_PER_RADIAN) * per_second
    noise = _NOISE_SECONDS * per_second
    return nearest(value, noise if noise < Fraction(1, 100) else Fraction(0))


def _azimuth_count(azimuth_rad: float, unit: AngleUnit, decimals: int) -> int:
    count = _count(full_turn(azimuth_rad), unit, decimals)
    return count % _units_per_turn(unit, decimals)


def _text(count: int, unit: AngleUnit, decimals: int) -> str:
    if unit is AngleUnit.GON:
        return as_decimal(count, decimals) + " gon"
    if unit is AngleUnit.DEGREES:
        return as_decimal(count, decimals) + "°"
    minutes, rest = divmod(abs(count), 60 * 10**decimals)
    degrees, minutes = divmod(minutes, 60)
    seconds = as_decimal(rest, decimals)
    if rest < 10 * 10**decimals:
        seconds = "0" + seconds
    sign = "-" if count < 0 else ""
    return f"{sign}{degrees}°{minutes:02d}'{seconds}\""
