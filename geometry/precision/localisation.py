"""Localisation: how satellite coordinates are laid on the control of the site.

A shift and a turn (scale held at 1) are fitted to marks known in both systems; what a
free scale would have been is reported, because a scale away from 1 is an alarm, not a
correction. Least squares with the full covariance of the control (Ghilani, *Adjustment
Computations*, from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.stats import chi2

from geometry import checked
from geometry.checked import Array
from geometry.decide import noncentrality
from geometry.errors import CoincidentPoints, EmptyInput, WrongShape
from geometry.precision.free_station import joint_of, solved
from geometry.precision.rays import turned
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class Localisation:
    """local = `local_centre` + R(`turn_rad`) (satellite - `satellite_centre`).

    `turn_rad` is clockwise. `covariance` (3, 3) of shift E, N (m) and turn (rad) about
    the centre; `gain` (3, 2k) carries errors of the control. `residuals_m` (k, 2):
    control less computed; `left_out_m` (k,): how far each mark lies from where the
    others alone put it. `smallest_moves_m` (k,) as for a free station. `scale_ppm` and
    its sigma: what a free scale would have been. `misfit` is chi-square with
    `redundancy` degrees of freedom; not tested without redundancy beyond a distance.
    """

    satellite_centre: Array
    local_centre: Array
    turn_rad: float
    covariance: Array
    gain: Array
    control: Array
    residuals_m: Array
    left_out_m: Array
    smallest_moves_m: tuple[float, ...]
    scale_ppm: float
    scale_sd_ppm: float
    misfit: float
    redundancy: int
    verdict: Verdict
    reason: str


@dataclass(frozen=True, slots=True, eq=False)
class LocalPoint:
    """A satellite position in local coordinates: (E, N), covariance (2, 2) in m².

    `outside_m` is how far it lies outside the circle through the control about its
    centre; beyond it the turn extrapolates and nothing checks it.
    """

    point: Array
    covariance_m2: Array
    outside_m: float


def localised(
    satellite: ArrayLike,
    control: ArrayLike,
    satellite_sd_m: float,
    control_covariances: ArrayLike | None = None,
    *,
    alpha: float = 0.001,
) -> Localisation:
    """Fit shift and turn of `satellite` (k, 2) onto `control` (k, 2), k >= 2.

    E, N in metres; `satellite_sd_m` per coordinate; `control_covariances` (k, 2, 2) or
    (2k, 2k) in m². Raises EmptyInput, WrongShape, NotFinite, CoincidentPoints.

    >>> fit = localised([(0, 0), (0, 100), (100, 0)], [(5, 5), (5, 105), (105, 5)], .01)
    >>> [round(float(x), 6) for x in local_point(fit, (50, 50), 0.01).point]
    [55.0, 55.0]
    """
    sat, loc, centre_s, centre_l = _pairs(satellite, control)
    sd = checked.sigma("satellite sigma", satellite_sd_m)
    sigma = joint_of(len(sat), control_covariances) + sd * sd * np.eye(2 * len(sat))
    turn, shift = math.atan2(*_turn(sat, loc)), np.zeros(2)
    for _ in range(8):
        vectors = _rotated(sat, turn)
        rows = _rows(vectors)
        covariance, gain, weight = solved(rows, sigma)
        step = gain @ (loc - shift - vectors).ravel()
        shift, turn = shift + step[:2], turn + float(step[2])
    vectors = _rotated(sat, turn)
    residuals = loc - shift - vectors
    misfit = float(residuals.ravel() @ weight @ residuals.ravel())
    spare = 2 * len(sat) - 3
    scale, scale_sd = _scale(vectors, residuals, sigma)
    verdict, reason = _verdict(misfit, spare, len(sat), alpha)
    return Localisation(
        satellite_centre=centre_s,
        local_centre=centre_l + shift,
        turn_rad=turn,
        covariance=covariance,
        gain=gain,
        control=loc + centre_l,
        residuals_m=residuals,
        left_out_m=_left_out(weight, residuals),
        smallest_moves_m=_moves(weight, len(sat)),
        scale_ppm=scale,
        scale_sd_ppm=scale_sd,
        misfit=misfit,
        redundancy=spare,
        verdict=verdict,
        reason=reason,
    )


def local_point(
    fit: Localisation, satellite: ArrayLike, satellite_sd_m: float
) -> LocalPoint:
    """A satellite position (E, N) in the local system, with its covariance."""
    sd = checked.sigma("satellite sigma", satellite_sd_m)
    vector = _rotated(
        checked.point("satellite", satellite) - fit.satellite_centre, fit.turn_rad
    )
    reach = np.column_stack([np.eye(2), turned(vector)])
    covariance = reach @ fit.covariance @ reach.T + sd * sd * np.eye(2)
    spread = np.hypot(*(fit.control - fit.control.mean(axis=0)).T).max()
    return LocalPoint(
        fit.local_centre + vector,
        0.5 * (covariance + covariance.T),
        max(0.0, float(np.hypot(*vector) - spread)),
    )


def _pairs(
    satellite: ArrayLike, control: ArrayLike
) -> tuple[Array, Array, Array, Array]:
    sat = checked.points("satellite", satellite)
    loc = checked.points("control", control)
    if len(sat) != len(loc):
        raise WrongShape(
            "Satellite and control points must be equally many.",
            where=f"There are {len(sat)} and {len(loc)}.",
        )
    if len(sat) < 2:
        raise EmptyInput(
            "A localisation needs at least two marks, three for any check.",
            where=f"{len(sat)} given.",
            do="Occupy more control marks.",
        )
    for name, points in (("satellite", sat), ("control", loc)):
        if float(np.ptp(points, axis=0).max()) < 1e-6:
            raise CoincidentPoints(f"All {name} points are one point.")
    centre_s, centre_l = sat.mean(axis=0), loc.mean(axis=0)
    return sat - centre_s, loc - centre_l, centre_s, centre_l


def _turn(sat: Array, loc: Array) -> tuple[float, float]:
    return float(np.sum(turned(sat) * loc)), float(np.sum(sat * loc))


def _rotated(vectors: Array, turn: float) -> Array:
    return np.asarray(math.cos(turn) * vectors + math.sin(turn) * turned(vectors))


def _rows(vectors: Array) -> Array:
    rows = np.zeros((2 * len(vectors), 3))
    rows[0::2, 0] = rows[1::2, 1] = 1.0
    rows[:, 2] = turned(vectors).ravel()
    return rows


def _scale(vectors: Array, residuals: Array, sigma: Array) -> tuple[float, float]:
    rows = np.column_stack([_rows(vectors), vectors.ravel()])
    weight = np.linalg.inv(sigma)
    covariance = np.linalg.inv(rows.T @ weight @ rows)
    estimate = covariance @ rows.T @ weight @ residuals.ravel()
    return 1e6 * float(estimate[3]), 1e6 * math.sqrt(float(covariance[3, 3]))


def _left_out(weight: Array, residuals: Array) -> Array:
    """Misfit of each mark against the others: W_jj^-1 (W v)_j, no refit needed."""
    pulled = weight @ residuals.ravel()
    gaps = np.zeros(len(residuals))
    for j in range(len(residuals)):
        part = slice(2 * j, 2 * j + 2)
        block = weight[part, part]
        if len(residuals) == 2 or np.linalg.cond(block) > 1e9:
            gaps[j] = np.inf
        else:
            gaps[j] = float(np.hypot(*np.linalg.solve(block, pulled[part])))
    return gaps


def _moves(weight: Array, count: int) -> tuple[float, ...]:
    moves = []
    for j in range(count):
        low, high = np.linalg.eigvalsh(weight[2 * j : 2 * j + 2, 2 * j : 2 * j + 2])
        seen = low > 1e-9 * high
        moves.append(math.sqrt(noncentrality(2) / low) if seen else math.inf)
    return tuple(moves)


def _verdict(
    misfit: float, spare: int, count: int, alpha: float
) -> tuple[Verdict, str]:
    if float(chi2.sf(misfit, spare)) < alpha:
        return Verdict.FAIL, "The satellite positions do not fit the control."
    if count == 2:
        return (
            Verdict.NOT_TESTED,
            "Two marks check only the distance between them.",
        )
    return Verdict.PASS, "The satellite positions fit the control."
