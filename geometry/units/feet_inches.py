"""Printing a length in feet, inches and fractions, as buildings are drawn."""

from __future__ import annotations

from fractions import Fraction

from geometry.errors import MixedFrames, OutOfRange
from geometry.units.length import Length
from geometry.units.rounding import half_away
from geometry.units.unit import Unit

DENOMINATORS = (1, 2, 4, 8, 16, 32, 64)


def feet_inches(length: Length, denominator: int = 8, foot: Unit = Unit.FOOT) -> str:
    """`length` to the nearest 1/`denominator` inch, halves away from zero.

    The fraction is reduced and carries into inches and feet. Raises OutOfRange for a
    denominator that is on no rule, MixedFrames when `foot` is the metre.

    >>> feet_inches(Length.parse("12.61", Unit.FOOT))
    '12\\'-7 3/8"'
    >>> feet_inches(Length.parse("-0.999", Unit.FOOT))
    '-1\\'-0"'
    """
    if denominator not in DENOMINATORS:
        raise OutOfRange(
            "Inches are divided into halves to 64ths.",
            where=f"The denominator is {denominator}.",
            do="Use 1, 2, 4, 8, 16, 32 or 64.",
        )
    if not foot.is_foot:
        raise MixedFrames("Feet and inches cannot be printed in metres.")
    count = half_away(length.in_unit(foot) * 12 * denominator)
    feet, parts = divmod(abs(count), 12 * denominator)
    inches, over = divmod(parts, denominator)
    part = Fraction(over, denominator)
    fraction = f" {part.numerator}/{part.denominator}" if over else ""
    return f"{'-' if count < 0 else ''}{feet}'-{inches}{fraction}\""
