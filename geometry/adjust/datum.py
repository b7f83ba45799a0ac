"""Free networks: motions that nothing measured, and precision relative to marks.

A network without control is solved with the fewest coordinates held, then carried to
the datum of chosen marks: those marks keep, on the average, their start positions.
The covariance follows by an S-transformation, Q_S = S Q S', S = I - G (G'BG)^-1 G'B,
written so that only as many solves are needed as there are free motions.

Baarda 1973 (S-transformations), Meissl 1962 (inner constraints); from memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.adjust.frontal import Factor
from geometry.adjust.rows import Ints, picked
from geometry.checked import Array
from geometry.errors import CoincidentPoints


@dataclass(frozen=True, slots=True, eq=False)
class Datum:
    """An S-transformation from the held datum to that of chosen marks.

    `spread` (c, d) is G (G'BG)^-1 and `gathered` (c, d) is B G over all coordinates
    of all points, c of them; `carried` (unknowns, d) is Q B G in the held datum.
    """

    spread: Array
    gathered: Array
    carried: Array
    inner: Array


def plane_motions(positions: Array, *, turn: bool, scale: bool) -> Array:
    """The motions a network may keep, (2n, d): shift E, shift N, turn, scale.

    >>> plane_motions(np.array([[0.0, 0.0], [2.0, 0.0]]), turn=True, scale=False).shape
    (4, 3)
    """
    count = len(positions)
    middle = positions - positions.mean(axis=0)
    middle = middle / max(float(np.abs(middle).max()), 1e-9)
    motions = [np.tile([1.0, 0.0], count), np.tile([0.0, 1.0], count)]
    if turn:
        motions.append((middle[:, ::-1] * (1.0, -1.0)).ravel())
    if scale:
        motions.append(middle.ravel())
    return np.stack(motions, axis=1)


def datum_of(motions: Array, weights: Array, columns: Ints, factor: Factor) -> Datum:
    """The datum in which marks with weight 1 carry the motions; weights (c,).

    `columns` (c,) are the unknowns of all coordinates, -1 where one is held.
    """
    gathered = motions * weights[:, None]
    spread = motions @ np.linalg.inv(motions.T @ gathered)
    used = columns >= 0
    right = np.zeros((len(factor.scale), motions.shape[1]))
    right[columns[used]] = gathered[used]
    carried = factor.solve(right)
    inner = gathered[used].T @ carried[columns[used]]
    return Datum(spread, gathered, carried, inner)


def moved_to_datum(datum: Datum, blocks: Array, at: Ints, columns: Ints) -> Array:
    """Covariance blocks (k, w, w) of coordinates `at` (k, w), carried to the datum.

    `columns` (k, w) are their unknowns, -1 where held.
    """
    spread = datum.spread[at]
    carried = picked(datum.carried, columns)
    cross = np.einsum("kad,kbd->kab", carried, spread)
    inner = np.einsum("kad,de,kbe->kab", spread, datum.inner, spread)
    moved: Array = blocks - cross - np.swapaxes(cross, 1, 2) + inner
    return moved


def fitted(
    positions: Array, start: Array, weights: Array, *, turn: bool, scale: bool
) -> Array:
    """Positions (n, 2) shifted, turned and scaled onto `start` at marks with weight.

    Shift always; turn and scale only where nothing measured holds them.
    """
    total = weights.sum()
    centre = weights @ positions / total
    goal = weights @ start / total
    p, q = positions - centre, start - goal
    along = float(np.sum(weights[:, None] * p * q))
    across = float(np.sum(weights * (p[:, 1] * q[:, 0] - p[:, 0] * q[:, 1])))
    size = float(np.sum(weights[:, None] * p * p))
    angle = np.arctan2(across, along) if turn else 0.0
    if (turn or scale) and size < 1e-12:
        raise CoincidentPoints(
            "The marks that carry the datum stand in one place.",
            do="Correct their start coordinates or choose others.",
        )
    if turn and scale:
        factor = np.hypot(along, across) / size
    else:
        factor = along / size if scale else 1.0
    c, s = factor * np.cos(angle), factor * np.sin(angle)
    rotated = np.stack([c * p[:, 0] + s * p[:, 1], c * p[:, 1] - s * p[:, 0]], axis=1)
    result: Array = rotated + goal
    return result
