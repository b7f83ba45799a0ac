"""Joint covariance of recorded marks: what they err by together, and each alone.

Control that was set from one base, one pair of stations or one file shares its error.
Kept only as one ellipse for each mark, that common part hides every real movement.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange


def common_and_relative(
    positions_m: ArrayLike,
    *,
    relative_m: float | ArrayLike,
    shift_m: float = 0.0,
    turn_rad: float = 0.0,
    scale: float = 0.0,
) -> Array:
    """Covariance (2k, 2k), E1, N1, E2, ..., of k marks with common errors.

    Sigmas: `relative_m` of each coordinate by itself (one number, or one for each
    mark), `shift_m` of all together, `turn_rad` and `scale` about their middle.

    >>> joint = common_and_relative([[0, 0], [9, 0]], relative_m=0.002, shift_m=0.02)
    >>> round(joint[0, 2] * 1e6), round(joint[0, 0] * 1e6)
    (400, 404)

    Raises WrongShape, NotFinite, OutOfRange.
    """
    at = checked.points("positions_m", positions_m)
    own = np.broadcast_to(np.asarray(relative_m, dtype=np.float64), (len(at),))
    own = checked.numbers("relative_m", own)
    if not bool((own > 0).all()):
        raise OutOfRange("Each mark needs some error of its own.")
    middle = at - at.mean(axis=0) if len(at) else at
    joint = np.diag(np.repeat(own**2, 2))
    turned = (middle[:, ::-1] * (1.0, -1.0)).ravel()
    for sigma, motion in (
        (shift_m, np.tile([1.0, 0.0], len(at))),
        (shift_m, np.tile([0.0, 1.0], len(at))),
        (turn_rad, turned),
        (scale, middle.ravel()),
    ):
        joint += checked.number("a common sigma", sigma) ** 2 * np.outer(motion, motion)
    return joint


def common_and_relative_heights(
    count: int, *, relative_m: float | ArrayLike, shift_m: float = 0.0
) -> Array:
    """Covariance (k, k) of heights with a common error, metres; see above.

    >>> joint = common_and_relative_heights(2, relative_m=0.001, shift_m=0.003)
    >>> joint.round(8).tolist()
    [[1e-05, 9e-06], [9e-06, 1e-05]]
    """
    own = np.broadcast_to(np.asarray(relative_m, dtype=np.float64), (count,))
    own = checked.numbers("relative_m", own)
    if not bool((own > 0).all()):
        raise OutOfRange("Each mark needs some error of its own.")
    joint: Array = np.diag(own**2) + checked.number("shift_m", shift_m) ** 2
    return joint
