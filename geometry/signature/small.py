"""The small systematic causes: a few millimetres or centimetres, all alike.

Each leaves its own field: a shift is the same everywhere, an orientation error
grows across the ray, a prism constant is radial and constant, a scale radial and
growing, and the foot's two parts per million point away from the grid's origin.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.signature.hypotheses import (
    Hypothesis,
    joined,
    radial_field,
    rotation_field,
    scale_field,
    shift_field,
    similarity_field,
)
from geometry.signature.kinds import Kind
from geometry.signature.setups import Setup

FOOT = 2e-6
"""US survey foot over international foot, less one: 2 parts per million.

500000/499999 exactly (85 FR 62698, 5 October 2020)."""

TWO_AT_ONCE = 2 * math.log(20)
"""A second blunder in one setup is taken to happen once in twenty of the first."""

ANY_SIZE = 2 * math.log(1000)
"""A blunder whose size may be anything foretells its size a thousand times less
sharply than one that names a mark; the loss says so, or the two would tie."""

SMALL = 2e-3
"""A rotation or scale up to here is straight enough to be fitted as a field."""

LONGEST_PRISM_M = 1.0
"""No prism constant, nor any adapter, is longer."""


def small_hypotheses(
    setups: Sequence[Setup], centre: Array, *, from_grid_origin: bool
) -> list[Hypothesis]:
    """Nothing, and every small cause for these setups.

    `from_grid_origin` tells that coordinates are those of the grid, not local ones;
    only then has the foot a field of its own.
    """
    found = [Hypothesis(Kind.NOTHING), Hypothesis(Kind.SHIFT, free=shift_field)]
    several = similarity_field(centre)
    found.append(
        Hypothesis(
            Kind.SEVERAL,
            free=several,
            rarity=TWO_AT_ONCE,
            limits=(math.inf, math.inf, SMALL, SMALL),
        )
    )
    for number, one in enumerate(setups):
        found += _of_setup(number, one)
    if from_grid_origin:
        found.append(Hypothesis(Kind.US_FOOT, fixed=lambda p: FOOT * p))
        found.append(Hypothesis(Kind.INTERNATIONAL_FOOT, fixed=lambda p: -FOOT * p))
    return found


def _of_setup(number: int, one: Setup) -> list[Hypothesis]:
    turn, radial = rotation_field(one), radial_field(one)
    return [
        Hypothesis(Kind.ROTATION, free=turn, limits=(SMALL,), setup=number),
        Hypothesis(Kind.PRISM, free=radial, limits=(LONGEST_PRISM_M,), setup=number),
        Hypothesis(Kind.SCALE, free=scale_field(one), limits=(SMALL,), setup=number),
        Hypothesis(
            Kind.PRISM_AND_ROTATION,
            free=joined(radial, turn),
            rarity=TWO_AT_ONCE,
            limits=(LONGEST_PRISM_M, SMALL),
            setup=number,
        ),
        Hypothesis(
            Kind.PRISM_AND_SHIFT,
            free=joined(radial, shift_field),
            rarity=TWO_AT_ONCE,
            limits=(LONGEST_PRISM_M, math.inf, math.inf),
            setup=number,
        ),
    ]


def known_field(about: str, field: Callable[[Array], Array]) -> Hypothesis:
    """A cause whose displacement is known beforehand and has nothing to fit.

    `field` takes points (n, 2) and gives displacements (n, 2), metres; `about` ends
    the sentence "This is what ... would do".
    """
    return Hypothesis(Kind.KNOWN, fixed=field, about=about)


def grid_for_ground(combined_factor: float, origin: ArrayLike) -> Hypothesis:
    """Grid coordinates staked at their face value, or the other way about.

    `combined_factor` is the one that was left out (grid = factor x ground), `origin`
    where grid and ground coordinates agree. Distances come out 1/factor too long.

    >>> h = grid_for_ground(0.9997, (0.0, 0.0))
    >>> h.fixed_at(np.array([[1000.0, 0.0]])).round(4).tolist()
    [[0.3001, 0.0]]
    """
    factor = checked.positive("The combined factor", combined_factor)
    centre = checked.point("The origin", origin)
    return known_field(
        "a combined factor left out", lambda p: (1 / factor - 1) * (p - centre)
    )


def swapped(points: Array) -> Array:
    """Easting for northing and northing for easting."""
    return np.column_stack([points[:, 1] - points[:, 0], points[:, 0] - points[:, 1]])
