"""A measured free station: its position from distances and directions to marks."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.stats import chi2

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, EmptyInput, OutOfRange, WrongShape
from geometry.precision.free_station import (
    FreeStation,
    design,
    free_station,
    joint_of,
    solved,
)
from geometry.precision.instruments import TotalStation
from geometry.precision.rays import turned
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class Fix:
    """Where the instrument stands. `station` (E, N) m; `orientation_rad` is added to a
    measured direction to give an azimuth. `residuals_m` (k, 2): recorded less computed
    place of each mark, E and N. `misfit` is v'Pv, chi-square with `redundancy` degrees
    of freedom; `probability` that it is as large by chance. The verdict is not tested
    without redundancy, fail below 0.001. `precision` as predicted at this place.
    """

    station: Array
    orientation_rad: float
    precision: FreeStation
    residuals_m: Array
    misfit: float
    probability: float
    redundancy: int
    verdict: Verdict
    reason: str


def resected(
    marks: ArrayLike,
    distances_m: ArrayLike,
    directions_rad: ArrayLike,
    instrument: TotalStation,
    mark_covariances: ArrayLike | None = None,
    *,
    alpha: float = 0.001,
) -> Fix:
    """Position and orientation from horizontal distances and directions to `marks`.

    `marks` (k, 2), k >= 2; `distances_m`, `directions_rad` (k,); covariances as in
    `free_station`. Starts from the closed rotation and shift of the measured figure
    onto the marks, so no first guess is needed, then weighted least squares. Raises
    EmptyInput, WrongShape, NotFinite, OutOfRange, CoincidentPoints, Singular.

    >>> fix = resected([(0, 50), (50, 0)], [50, 50], [0.0, math.pi / 2], TotalStation())
    >>> [round(abs(float(x)), 6) for x in fix.station], fix.redundancy
    ([0.0, 0.0], 1)
    """
    m, local = _figure(marks, distances_m, directions_rad)
    joint = joint_of(len(m), mark_covariances)
    origin = m.mean(axis=0)
    station, turn = _start(m - origin, local)
    for _ in range(12):
        vectors = _rotated(local, turn)
        rows, noise = design(vectors, instrument)
        _, gain, weight = solved(rows, noise + joint)
        gaps = (m - origin - station - vectors).ravel()
        step = gain @ gaps
        station, turn = station + step[:2], turn + float(step[2])
        if float(np.abs(step).max()) < 1e-12:
            break
    vectors = _rotated(local, turn)
    residuals = m - origin - station - vectors
    misfit = float(residuals.ravel() @ weight @ residuals.ravel())
    spare = 2 * len(m) - 3
    probability = float(chi2.sf(misfit, spare))
    return Fix(
        station=station + origin,
        orientation_rad=turn % (2 * math.pi),
        precision=free_station(station + origin, m, instrument, joint),
        residuals_m=residuals,
        misfit=misfit,
        probability=probability,
        redundancy=spare,
        verdict=Verdict.PASS if probability >= alpha else Verdict.FAIL,
        reason=_reason(len(m), probability >= alpha),
    )


def _figure(
    marks: ArrayLike, distances_m: ArrayLike, directions_rad: ArrayLike
) -> tuple[Array, Array]:
    m = checked.points("marks", marks)
    d = checked.numbers("distances", distances_m)
    r = checked.numbers("directions", directions_rad)
    if len(m) < 2:
        raise EmptyInput("A free station needs at least two marks.", do="Sight more.")
    if not len(m) == len(d) == len(r):
        raise WrongShape(
            "Marks, distances and directions must be equally many.",
            where=f"There are {len(m)}, {len(d)} and {len(r)}.",
        )
    if float(d.min()) <= 0:
        raise OutOfRange(
            "distances must be greater than zero.",
            where=f"It is in row {int(d.argmin()) + 1}.",
        )
    if float(np.ptp(m, axis=0).max()) < 1e-6:
        raise CoincidentPoints(
            "All marks sighted are one point.", do="Sight marks that lie apart."
        )
    return m, np.column_stack([d * np.sin(r), d * np.cos(r)])


def _start(marks: Array, local: Array) -> tuple[Array, float]:
    a, b = local - local.mean(axis=0), marks - marks.mean(axis=0)
    # Clockwise turn that lays the measured figure on the marks best.
    turn = math.atan2(float(np.sum(turned(a) * b)), float(np.sum(a * b)))
    return marks.mean(axis=0) - _rotated(local, turn).mean(axis=0), turn


def _rotated(vectors: Array, turn: float) -> Array:
    return np.asarray(math.cos(turn) * vectors + math.sin(turn) * turned(vectors))


def _reason(count: int, fits: bool) -> str:
    if count == 2:
        return "Two marks check only the distance between them, not which is wrong."
    if fits:
        return "The sights agree with the recorded marks."
    return "The sights do not agree with the recorded marks."
