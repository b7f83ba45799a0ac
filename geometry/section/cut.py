"""Cut and fill: how far the ground, or a hub, is above or below the design.

Cut is positive: what was measured lies above what is wanted (the trade's C and F on
a stake; common practice). Computed unrounded; a label rounds once.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class CutFill:
    """`cut_m` (n,), fill negative; `word` for each: cut, fill or grade."""

    cut_m: Array
    word: tuple[str, ...]


def cut_fill(
    measured_m: ArrayLike, design_m: ArrayLike, *, grade_within_m: float = 0.0005
) -> CutFill:
    """Cuts of measured elevations (n,) against design elevations (n,) or one.

    Within `grade_within_m` (half of what the label shows) it is at grade.

    >>> cut_fill([101.25, 99.0, 100.0], 100.0).word
    ('cut', 'fill', 'grade')

    Raises NotFinite or WrongShape.
    """
    measured = checked.numbers("measured elevations", measured_m)
    design = checked.numbers("design elevations", design_m)
    if design.size not in (1, measured.size):
        raise WrongShape(
            "There must be one design elevation, or one for each measured.",
            where=f"{measured.size} measured, {design.size} designed.",
        )
    within = checked.number("grade_within_m", grade_within_m)
    cut = measured - design
    words = np.where(np.abs(cut) <= within, "grade", np.where(cut > 0, "cut", "fill"))
    return CutFill(cut, tuple(words.tolist()))


@dataclass(frozen=True, slots=True, eq=False)
class Ladder:
    """From a reference stake to each break: what its marks say; arrays (n,), metres.

    `in_m` is the level distance from the stake towards the line (negative: farther
    out); `cut_m` is how far the break lies below the stake's hub, fill negative.
    """

    in_m: Array
    cut_m: Array


def ladder(
    hub_offset_m: float,
    hub_elevation_m: float,
    offsets_m: ArrayLike,
    elevations_m: ArrayLike,
) -> Ladder:
    """Distances and cuts from a hub to breaks of the section, in the given order.

    >>> marks = ladder(12.0, 103.5, [9.0, 6.0], [102.0, 100.5])
    >>> marks.in_m.tolist(), marks.cut_m.tolist()
    ([3.0, 6.0], [1.5, 3.0])

    Raises WrongShape or NotFinite.
    """
    hub = checked.number("The hub's offset", hub_offset_m)
    height = checked.number("The hub's elevation", hub_elevation_m)
    offsets = checked.numbers("offsets", offsets_m)
    elevations = checked.numbers("elevations", elevations_m)
    if offsets.shape != elevations.shape:
        raise WrongShape("Every break needs an offset and an elevation.")
    side = -1.0 if hub < 0 else 1.0
    return Ladder(side * (hub - offsets), height - elevations)
