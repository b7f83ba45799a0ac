"""Rounding as the trade does it: once, from the exact value, halves away from zero."""

from __future__ import annotations

from fractions import Fraction

from geometry.errors import OutOfRange

MOST_DECIMALS = 9
"""A nanometre is the ninth decimal of a metre; nothing is kept finer."""


def half_away(value: Fraction) -> int:
    """The nearest integer, halves away from zero.

    >>> half_away(Fraction(5, 2)), half_away(Fraction(-5, 2))
    (3, -3)
    """
    doubled = abs(value.numerator) * 2 + value.denominator
    nearest = doubled // (2 * value.denominator)
    return -nearest if value < 0 else nearest


def nearest(value: Fraction, noise: Fraction) -> int:
    """`half_away`, where a value less than `noise` from a half counts as that half.

    A half that somebody entered is stored a hair to either side of it; the noise of
    that storage must not decide which way it goes. Noise must be well under a half.

    >>> nearest(Fraction(249999, 100000), Fraction(1, 10000))
    3
    """
    half = abs(value) // 1 + Fraction(1, 2)
    if abs(abs(value) - half) < noise:
        return half_away(half if value > 0 else -half)
    return half_away(value)


def as_decimal(count: int, decimals: int) -> str:
    """`count` units of the last decimal as text; zero never has a sign.

    >>> as_decimal(-1205, 2), as_decimal(0, 2), as_decimal(7, 0)
    ('-12.05', '0.00', '7')
    """
    digits = str(abs(count)).rjust(decimals + 1, "0")
    sign = "-" if count < 0 else ""
    if decimals == 0:
        return sign + digits
    return f"{sign}{digits[:-decimals]}.{digits[-decimals:]}"


def checked_decimals(decimals: int) -> int:
    """`decimals` if it is a whole number from 0 to 9, else OutOfRange."""
    if not 0 <= decimals <= MOST_DECIMALS:
        raise OutOfRange(
            "The number of decimals must be from 0 to 9.", where=f"It is {decimals}."
        )
    return decimals
