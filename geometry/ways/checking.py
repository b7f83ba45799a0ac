"""The independent check of a way: which measurement proves it, and what it can see.

A check shares no mark with the way. Of those possible, the first is the one that sees
best along the long axis of the predicted ellipse, where an error is likeliest; the
second the one that with it leaves the least error unseen in any direction.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry.checked import Array, Flags, Indices
from geometry.decide import noncentrality
from geometry.ways.draft import Draft
from geometry.ways.scene import Scene
from geometry.ways.way import Check, Kind


@dataclass(frozen=True, slots=True, eq=False)
class Checks:
    """Checks chosen, and the smallest error they see together in any direction."""

    chosen: tuple[Check, ...]
    smallest_move_m: float


def checks_for(draft: Draft, scene: Scene, covariance: Array) -> Checks:
    """Up to two distances from marks the way does not use; else the setup's own."""
    marks, taped = _possible(draft, scene)
    if not len(marks):
        if draft.own_check is None:
            return Checks((), math.inf)
        return Checks((draft.own_check,), draft.own_check.smallest_move_m)
    rays = scene.place - scene.xy[marks]
    u = rays / scene.away[marks][:, None]
    gap = _gap_covariance(draft, scene, covariance, marks)
    between = np.einsum("ik,ijkl,jl->ij", u, gap, u)
    between[np.diag_indices(len(marks))] += _tool_variance(scene, marks, taped)
    sd = np.sqrt(np.diag(between))
    order = _order(scene, marks, taped, u, sd, covariance)
    first = int(order[0])
    chosen, seen = [first], math.inf
    if len(order) > 1:
        second, seen = _second(between, u, first, order[1:])
        chosen.append(second)
    return Checks(
        tuple(
            _check(draft, scene, int(marks[i]), bool(taped[i]), u[i], float(sd[i]))
            for i in chosen
        ),
        seen,
    )


def _possible(draft: Draft, scene: Scene) -> tuple[Indices, Flags]:
    free = scene.usable.copy()
    free[list(draft.marks)] = False
    tape, station = scene.tools.tape, scene.tools.total_station
    none = np.zeros(len(free), dtype=bool)
    taped = none if tape is None else scene.away <= tape.length_m
    shot = none
    if station is not None:
        shot = scene.occupiable & (scene.away <= station.distance_m)
        shot &= scene.away >= 1.5
    if tape is not None:
        # Two lengths of tape, where no instrument is at hand.
        taped = taped | (~shot & (scene.away <= 2 * tape.length_m))
    marks = np.flatnonzero(free & (taped | shot))
    return marks, taped[marks]


def _gap_covariance(
    draft: Draft, scene: Scene, covariance: Array, marks: Indices
) -> Array:
    """Covariance (c, c, 2, 2) of point less mark, for each two of `marks`."""
    rows = np.ravel([(2 * i, 2 * i + 1) for i in draft.marks]).astype(np.intp)
    reach = np.hstack(draft.jacobians)
    cross = (reach @ scene.joint[rows]).reshape(2, -1, 2).transpose(1, 0, 2)[marks]
    count = len(scene.marks)
    blocks = scene.joint.reshape(count, 2, count, 2).transpose(0, 2, 1, 3)
    own = blocks[np.ix_(marks, marks)]
    return np.asarray(
        covariance[None, None]
        - cross[None, :]
        - cross.transpose(0, 2, 1)[:, None]
        + own
    )


def _tool_variance(scene: Scene, marks: Indices, taped: Flags) -> Array:
    tape, station = scene.tools.tape, scene.tools.total_station
    found = np.zeros(len(marks))
    for i, mark in enumerate(marks):
        d = float(scene.away[mark])
        if taped[i] and tape is not None:
            found[i] = tape.variance(d)
        elif station is not None:
            found[i] = (
                station.distance_variance(d)
                + station.station_centring_m**2
                + station.target_centring_m**2
            )
    return found


def _order(
    scene: Scene,
    marks: Indices,
    taped: Flags,
    u: Array,
    sd: Array,
    covariance: Array,
) -> Indices:
    """Trusted and clear first, the tape before the instrument, then what sees most."""
    axis = np.linalg.eigh(covariance)[1][:, 1]
    blind = sd / np.maximum(np.abs(u @ axis), 0.05)
    return np.lexsort((blind, ~taped, ~scene.clear[marks], ~scene.trusted[marks]))


def _second(between: Array, u: Array, first: int, others: Indices) -> tuple[int, float]:
    """The check that leaves least unseen beside `first`: sqrt(lambda0 / least
    eigenvalue of G' C^-1 G), two by two in closed form."""
    a, b, c = between[first, first], between[first, others], between[others, others]
    det = np.maximum(a * c - b * b, 1e-30)
    v, w = u[first], u[others]
    paa, pab, pbb = c / det, -b / det, a / det
    ee = paa * v[0] ** 2 + 2 * pab * v[0] * w[:, 0] + pbb * w[:, 0] ** 2
    nn = paa * v[1] ** 2 + 2 * pab * v[1] * w[:, 1] + pbb * w[:, 1] ** 2
    en = (
        paa * v[0] * v[1]
        + pab * (v[0] * w[:, 1] + v[1] * w[:, 0])
        + pbb * w[:, 0] * w[:, 1]
    )
    least = 0.5 * (ee + nn) - np.sqrt((0.5 * (ee - nn)) ** 2 + en * en)
    best = int(np.argmax(least))
    if least[best] <= 1e-9 * (ee[best] + nn[best]):
        return int(others[best]), math.inf
    return int(others[best]), math.sqrt(noncentrality(2) / float(least[best]))


def _check(
    draft: Draft, scene: Scene, mark: int, taped: bool, u: Array, sd: float
) -> Check:
    name = "taped distance" if taped else "measured distance"
    if taped and draft.kind is Kind.TIES:
        name = "third tie"
    return Check(
        name=name,
        at=scene.marks[mark].id,
        to=scene.target.id,
        expected=float(scene.away[mark]),
        unit="m",
        sd=sd,
        tolerance=scene.target.tolerance_m,
        gradient=(float(u[0]), float(u[1])),
        smallest_move_m=math.sqrt(noncentrality(1)) * sd,
        with_="tape" if taped else "total station",
        trusted=bool(scene.trusted[mark]),
    )
