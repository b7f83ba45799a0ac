"""Where the old stake stood, where the design is now, and what was built between.

When work was built from the old stake the surveyor decides: hold the design, or match
the work in place. These are the numbers for that decision.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array


@dataclass(frozen=True, slots=True)
class Shift:
    """From one place to another, metres: `east`, `north`, their length, and along and
    to the right of the line when its azimuth was given (else None)."""

    east_m: float
    north_m: float
    length_m: float
    along_m: float | None
    right_m: float | None


@dataclass(frozen=True, slots=True)
class Differences:
    """`as_set`: old stake from design; `built`: work from design; `built_from_stake`:
    work from old stake. None where that place is not known."""

    as_set: Shift | None
    built: Shift | None
    built_from_stake: Shift | None


def differences(
    design: ArrayLike,
    as_set: ArrayLike | None = None,
    built: ArrayLike | None = None,
    *,
    azimuth_rad: float | None = None,
) -> Differences:
    """Shifts between design, stake as set and work as built; points (E, N) in metres.

    Raises WrongShape, NotFinite.

    >>> d = differences((0, 0), (0.01, 0), (0.03, 0), azimuth_rad=0.0)
    >>> round(d.built_from_stake.right_m, 6)
    0.02
    """
    home = checked.point("design", design)
    old = None if as_set is None else checked.point("as set", as_set)
    work = None if built is None else checked.point("built", built)
    return Differences(
        _shift(home, old, azimuth_rad),
        _shift(home, work, azimuth_rad),
        None if old is None else _shift(old, work, azimuth_rad),
    )


def _shift(start: Array, end: Array | None, azimuth_rad: float | None) -> Shift | None:
    if end is None:
        return None
    east, north = (float(x) for x in end - start)
    along = right = None
    if azimuth_rad is not None:
        a = checked.number("azimuth", azimuth_rad)
        along = east * math.sin(a) + north * math.cos(a)
        right = east * math.cos(a) - north * math.sin(a)
    return Shift(east, north, math.hypot(east, north), along, right)
