"""Digits as they are shown: one rule that every language gives alike.

Half of the last place goes away from zero, and so does what lies under half by less
than a ten-thousandth of the last place: differences of coordinates lose that much in
floats, and a tie written on paper must not turn on it. Zero has no sign.
"""

from __future__ import annotations

import math

from geometry import checked
from geometry.errors import OutOfRange

TIE = 1e-4
"""Share of the last place by which a tie may be missed and is still a tie."""

MOST_PLACES = 9
LARGEST = 9007199254740992.0
"""2**53: whole numbers beyond it are not all held by a float."""


def shown(value: float, places: int) -> str:
    """`value` with `places` decimals, ties away from zero.

    Raises NotFinite, or OutOfRange when the digits exceed what a float holds.

    >>> shown(0.285, 2), shown(-0.0004, 3), shown(1.0005, 3)
    ('0.29', '0.000', '1.001')
    """
    number = checked.number("value", value)
    if not 0 <= places <= MOST_PLACES:
        raise OutOfRange(
            "places must be from 0 to 9.", where=f"It is {places}.", do="Show fewer."
        )
    scale = 10.0**places
    scaled = abs(number) * scale
    if scaled >= LARGEST:
        raise OutOfRange(
            "value has more digits than can be shown truly.",
            do="Show fewer places or check the unit.",
        )
    whole = math.floor(scaled + 0.5 + TIE)
    digits = str(whole).rjust(places + 1, "0")
    sign = "-" if number < 0 and whole > 0 else ""
    if places == 0:
        return sign + digits
    return f"{sign}{digits[:-places]}.{digits[-places:]}"


def shown_apart(value: float, limit: float, places: int) -> tuple[str, str]:
    """`value` and `limit` with as many decimals as tell which is larger.

    A difference of 0.0204 against a tolerance of 0.02 must not be shown as 0.02
    against 0.02 beside the word fail. At most three places are added.

    >>> shown_apart(0.0204, 0.02, 2)
    ('0.0204', '0.0200')
    >>> shown_apart(0.01, 0.02, 2)
    ('0.01', '0.02')
    """
    last = min(places + 3, MOST_PLACES)
    for digits in range(places, last + 1):
        pair = shown(abs(value), digits), shown(abs(limit), digits)
        if pair[0] != pair[1]:
            break
    else:
        pair = shown(abs(value), places), shown(abs(limit), places)
        digits = places
    sign = "-" if value < 0 and float(pair[0]) > 0 else ""
    return sign + pair[0], pair[1]
