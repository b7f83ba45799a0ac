"""The smallest move a check could have seen, and the largest it could have missed.

From it follows how far back a doubt runs: to the last check that could have seen the
movement found.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike
from scipy.optimize import brentq
from scipy.stats import chi2, ncx2, norm

from geometry import checked
from geometry.errors import OutOfRange

ALPHA = 0.001
POWER = 0.80


@dataclass(frozen=True, slots=True)
class SmallestMove:
    """`any_m`: found whatever its direction; `best_m`: along `best_azimuth_rad`.

    `any_m` is infinite when the measurements leave a direction unseen. `blind_rad` is
    the direction in which a move hides best.
    """

    any_m: float
    best_m: float
    best_azimuth_rad: float
    blind_rad: float


@lru_cache(maxsize=256)
def noncentrality(dimensions: int, alpha: float = ALPHA, power: float = POWER) -> float:
    """lambda0: shift of a chi-square test that is found with `power` at `alpha`.

    Baarda, *A testing procedure for use in geodetic networks* (1968), from memory; one
    dimension by normal quantiles as there, more by the noncentral chi-square.

    >>> round(noncentrality(1), 3), round(noncentrality(2), 4)
    (17.075, 19.6624)
    """
    if dimensions == 1:
        return float((norm.isf(alpha / 2) + norm.isf(1 - power)) ** 2)
    limit = float(chi2.isf(alpha, dimensions))
    return float(
        brentq(lambda lam: ncx2.sf(limit, dimensions, lam) - power, 1e-6, 500.0)
    )


def smallest_seen(
    uncertainty: float,
    sensitivity: float = 1.0,
    *,
    limit: float | None = None,
    alpha: float = ALPHA,
    power: float = POWER,
) -> float:
    """Smallest move along one direction that one check finds with `power`.

    `sensitivity` is how much the checked number changes per metre of move (for a
    distance the cosine between move and line). With `limit` the check calls out beyond
    that tolerance, so a move must bring it to limit + z x uncertainty; without, beyond
    a test of size `alpha`. Infinite for a move the number does not feel. Raises
    NotFinite, OutOfRange.

    >>> round(smallest_seen(0.002), 5), round(smallest_seen(0.002, 0.5, limit=0.01), 4)
    (0.00826, 0.0234)
    """
    u = checked.not_negative("uncertainty", uncertainty)
    felt = abs(checked.number("sensitivity", sensitivity))
    if limit is None:
        shift = math.sqrt(noncentrality(1, alpha, power)) * u
    else:
        shift = checked.positive("limit", limit) + float(norm.isf(1 - power)) * u
    return math.inf if felt < 1e-9 else shift / felt


def could_have_seen(
    move_m: ArrayLike,
    gradient: ArrayLike,
    uncertainty: float,
    *,
    limit: float | None = None,
) -> bool:
    """Whether a check would have found this move of its mark with 80 % power.

    `move_m` (dE, dN); `gradient` (2,) is the change of the checked number per metre of
    easting and northing. Raises WrongShape, NotFinite, OutOfRange.

    >>> could_have_seen((0.02, 0.0), (1.0, 0.0), 0.002)
    True
    >>> could_have_seen((0.02, 0.0), (0.0, 1.0), 0.002)
    False
    """
    shift = float(checked.point("move", move_m) @ checked.point("gradient", gradient))
    return abs(shift) >= smallest_seen(uncertainty, limit=limit)


def smallest_move(
    gradients: ArrayLike,
    covariance: ArrayLike,
    *,
    alpha: float = ALPHA,
    power: float = POWER,
) -> SmallestMove:
    """Smallest move of one mark that several checks together find.

    `gradients` (k, 2): change of each checked number per metre E and N of the mark;
    `covariance` (k, k) of the differences measured less computed, in m². The test is
    chi-square with 2 degrees of freedom (1 when all checks look one way); the answer
    sqrt(lambda0 / eigenvalue of G' C^-1 G). Raises WrongShape, NotFinite, OutOfRange,
    or OutOfRange when the covariance cannot be inverted.

    >>> import numpy as np
    >>> m = smallest_move(np.eye(2), 4e-6 * np.eye(2))
    >>> round(m.any_m, 5)
    0.00887
    """
    g = checked.points("gradients", gradients)
    if len(g) == 0:
        return SmallestMove(math.inf, math.inf, 0.0, 0.0)
    c = checked.covariance("covariance", covariance, size=len(g))
    if float(np.linalg.eigvalsh(c).min()) <= 0:
        raise OutOfRange(
            "covariance has a direction without uncertainty.",
            do="Give every check a standard deviation greater than zero.",
        )
    values, axes = np.linalg.eigh(g.T @ np.linalg.solve(c, g))
    low, high = float(values[0]), float(values[1])
    seen_both = low > 1e-9 * high and high > 0
    lam = noncentrality(2 if seen_both else 1, alpha, power)
    azimuths = [float(math.atan2(axes[0, i], axes[1, i]) % math.pi) for i in (0, 1)]
    return SmallestMove(
        any_m=math.sqrt(lam / low) if seen_both else math.inf,
        best_m=math.sqrt(lam / high) if high > 0 else math.inf,
        best_azimuth_rad=azimuths[1],
        blind_rad=azimuths[0],
    )
