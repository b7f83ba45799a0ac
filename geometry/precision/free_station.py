"""Free station: predicted precision, and the solution of a measured one.

Each mark is seen by distance and direction. Written in eastings and northings, mark j
gives dM_j = dP + v_j dw + noise, v = (dN, -dE) being how its vector turns with the
orientation w; errors of the marks themselves are folded into the noise, which is the
full least-squares answer when their joint covariance is given (Mikhail & Gracie 1981,
from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.decide import noncentrality
from geometry.errors import EmptyInput, Singular, WrongShape
from geometry.precision.instruments import TotalStation
from geometry.precision.rays import ray_noise, span, turned


@dataclass(frozen=True, slots=True, eq=False)
class FreeStation:
    """Predicted precision of a free station that sees k marks.

    `covariance` (3, 3) of E, N (m) and orientation (rad). `gain` (3, 2k) carries errors
    of the marks into the station; `noise` (3, 3) is the part that measuring adds.
    `redundancy` is 2k - 3. `smallest_moves_m` (k,): the smallest move of each mark that
    would be found whatever its direction; infinite when some direction is unseen, as
    it always is with two marks.
    """

    station: Array
    covariance: Array
    gain: Array
    noise: Array
    redundancy: int
    smallest_moves_m: tuple[float, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Placed:
    """A point sighted from a free station: covariance (2, 2) in m², its part `noise`
    from measuring, and `to_marks` (2, 2k) which carries errors of the marks."""

    covariance_m2: Array
    to_marks: Array
    noise_m2: Array


def joint_of(count: int, covariance: ArrayLike | None) -> Array:
    """Joint covariance (2k, 2k) from (k, 2, 2) blocks, from the whole, or zero."""
    if covariance is None:
        return np.zeros((2 * count, 2 * count))
    given = np.asarray(covariance, dtype=np.float64)
    if given.shape == (count, 2, 2):
        whole = np.zeros((2 * count, 2 * count))
        for i, block in enumerate(given):
            whole[2 * i : 2 * i + 2, 2 * i : 2 * i + 2] = block
        given = whole
    if given.shape != (2 * count, 2 * count):
        raise WrongShape(
            "mark covariances must be one 2 by 2 block per mark, or one joint matrix.",
            where=f"They have shape {given.shape} for {count} marks.",
        )
    return checked.covariance("mark covariances", given, size=2 * count)


def free_station(
    station: ArrayLike,
    marks: ArrayLike,
    instrument: TotalStation,
    mark_covariances: ArrayLike | None = None,
) -> FreeStation:
    """Predict a free station at `station` (E, N) that sees `marks` (k, 2), k >= 2.

    `mark_covariances` (k, 2, 2) or joint (2k, 2k), m²; none: errorless marks. Raises
    EmptyInput for fewer than two marks, CoincidentPoints when the station stands on
    one, Singular when all marks are one place.

    >>> f = free_station((0, 0), [(0, 50), (50, 0), (-40, -40)], TotalStation())
    >>> f.redundancy
    3
    """
    p = checked.point("station", station)
    m = checked.points("marks", marks)
    if len(m) < 2:
        raise EmptyInput(
            "A free station needs at least two marks, three for any check.",
            where=f"{len(m)} given.",
            do="Sight more marks.",
        )
    for mark in m:
        span("station and mark", p, mark)
    joint = joint_of(len(m), mark_covariances)
    rows, noise = design(m - p, instrument)
    covariance, gain, residual = solved(rows, noise + joint)
    own = gain @ noise @ gain.T
    moves = tuple(_smallest(residual, i) for i in range(len(m)))
    return FreeStation(p, covariance, gain, 0.5 * (own + own.T), 2 * len(m) - 3, moves)


def sighted(free: FreeStation, target: ArrayLike, instrument: TotalStation) -> Placed:
    """Covariance of `target` (E, N) set or measured from the free station.

    Raises CoincidentPoints when the target is the station itself.
    """
    t = checked.point("target", target)
    vector, _ = span("station and target", free.station, t)
    reach = np.column_stack([np.eye(2), turned(vector)])
    noise = ray_noise(vector, instrument)
    own = reach @ free.noise @ reach.T + noise
    total = reach @ free.covariance @ reach.T + noise
    return Placed(0.5 * (total + total.T), reach @ free.gain, 0.5 * (own + own.T))


def design(vectors: Array, instrument: TotalStation) -> tuple[Array, Array]:
    """Design rows (2k, 3) and noise (2k, 2k) of the sights along `vectors` (k, 2)."""
    count = len(vectors)
    rows = np.zeros((2 * count, 3))
    rows[0::2, 0] = rows[1::2, 1] = 1.0
    rows[:, 2] = turned(vectors).ravel()
    noise = np.zeros((2 * count, 2 * count))
    for i, block in enumerate(ray_noise(vectors, instrument)):
        noise[2 * i : 2 * i + 2, 2 * i : 2 * i + 2] = block
    return rows, noise


def solved(rows: Array, sigma: Array) -> tuple[Array, Array, Array]:
    """Covariance of the unknowns, gain, and the weight of the residuals.

    Raises Singular when the sights do not fix position and orientation.
    """
    weight = _inverse(sigma)
    normal = rows.T @ weight @ rows
    scale = 1.0 / np.sqrt(np.diag(normal))
    even = normal * np.outer(scale, scale)
    if float(np.linalg.eigvalsh(even).min()) < 1e-12:
        raise Singular(
            "The marks sighted do not fix the station.",
            where="They lie at one place.",
            do="Sight a mark in another direction.",
        )
    covariance = np.linalg.inv(even) * np.outer(scale, scale)
    gain = covariance @ rows.T @ weight
    return covariance, gain, weight - weight @ rows @ gain


def _inverse(sigma: Array) -> Array:
    try:
        return np.asarray(np.linalg.inv(sigma))
    except np.linalg.LinAlgError as error:
        raise Singular(
            "The sights have no uncertainty to weigh them by.",
            do="Give instrument and marks standard deviations above zero.",
        ) from error


def _smallest(residual: Array, mark: int) -> float:
    block = residual[2 * mark : 2 * mark + 2, 2 * mark : 2 * mark + 2]
    low, high = np.linalg.eigvalsh(block)
    if low <= 1e-9 * high or low <= 0:
        return math.inf
    return math.sqrt(noncentrality(2) / float(low))
