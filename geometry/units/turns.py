"""Angles as numbers: bringing them into one turn, and the mean of directions.

Radians throughout. A misclosure of an angle means nothing until it is brought into
half a turn either way; a mean of 359 and 1 degree is 0, not 180.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.errors import EmptyInput, OutOfRange

TWO_PI = 2.0 * math.pi
SECONDS_PER_RADIAN = 648000.0 / math.pi
"""206 264.806 seconds of arc in a radian."""


def full_turn(angle_rad: float) -> float:
    """The angle in [0, 2 pi). Raises NotFinite.

    >>> full_turn(-1e-20), round(full_turn(-math.pi / 2), 6)
    (0.0, 4.712389)
    """
    turned = checked.number("angle", angle_rad) % TWO_PI
    return 0.0 if turned >= TWO_PI else turned


def half_turn(angle_rad: float) -> float:
    """The angle in [-pi, pi), as misclosures and turns left or right are told.

    >>> round(half_turn(math.radians(359)), 6)
    -0.017453
    """
    return (checked.number("angle", angle_rad) + math.pi) % TWO_PI - math.pi


def mean_direction(directions_rad: ArrayLike) -> float:
    """The mean of directions in [0, 2 pi), by atan2 of the summed sines and cosines.

    Raises EmptyInput without directions, OutOfRange when they cancel each other.

    >>> round(math.degrees(mean_direction(np.radians([359.0, 3.0]))), 6)
    1.0
    """
    values = checked.numbers("directions", directions_rad)
    if values.size == 0:
        raise EmptyInput("A mean needs at least one direction.")
    east, north = float(np.sin(values).sum()), float(np.cos(values).sum())
    if math.hypot(east, north) < 1e-9 * values.size:
        raise OutOfRange(
            "The directions cancel each other, so they have no mean.",
            do="Check for a direction read to the wrong mark.",
        )
    return full_turn(math.atan2(east, north))
