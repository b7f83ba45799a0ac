"""The best mark to occupy and the best backsight, over all ordered pairs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Indices
from geometry.ellipse import FACTOR_95_2D
from geometry.errors import EmptyInput, OutOfRange, WrongShape
from geometry.precision.candidates import NEAREST_M
from geometry.precision.free_station import joint_of
from geometry.precision.instruments import TotalStation


@dataclass(frozen=True, slots=True, eq=False)
class Occupations:
    """Ordered pairs best first: `stations`, `backsights` (m,) indices into the marks,
    `score` (m,) worst 95 % semi-major over tolerance among the targets."""

    stations: Indices
    backsights: Indices
    score: Array


def best_occupied(
    marks: ArrayLike,
    targets: ArrayLike,
    tolerances_m: ArrayLike,
    instrument: TotalStation,
    mark_covariances: ArrayLike | None = None,
    *,
    between: ArrayLike | None = None,
    occupiable: ArrayLike | None = None,
) -> Occupations:
    """Judge every station and backsight among `marks` (k, 2) for `targets` (t, 2).

    Covariances (k, 2, 2) or joint (2k, 2k) in m²; `between` (k, k) bool, which marks
    see each other; `occupiable` (k,) bool. Raises EmptyInput, WrongShape, NotFinite,
    OutOfRange.

    >>> o = best_occupied([(0, 0), (0, 90), (90, 0)], [(30, 30)], 0.02, TotalStation())
    >>> len(o.score)
    6
    """
    m, t = checked.points("marks", marks), checked.points("targets", targets)
    if len(m) < 2 or not len(t):
        raise EmptyInput(
            "At least two marks and one target are needed.",
            where=f"There are {len(m)} and {len(t)}.",
        )
    tolerance = np.broadcast_to(checked.numbers("tolerances", tolerances_m), (len(t),))
    if float(tolerance.min()) <= 0:
        raise OutOfRange("tolerances must be greater than zero.")
    s, b = _pairs(m, between, occupiable)
    ratio = _semi_major(m, s, b, t, joint_of(len(m), mark_covariances), instrument)
    score = (FACTOR_95_2D * ratio / tolerance).max(axis=1)
    order = np.argsort(score, kind="stable")
    return Occupations(s[order], b[order], score[order])


def _pairs(
    marks: Array, between: ArrayLike | None, occupiable: ArrayLike | None
) -> tuple[Indices, Indices]:
    count = len(marks)
    gap = marks[:, None] - marks[None]
    allowed = np.hypot(gap[..., 0], gap[..., 1]) > NEAREST_M
    for name, value, shape in (
        ("between", between, (count, count)),
        ("occupiable", occupiable, (count,)),
    ):
        if value is None:
            continue
        mask = np.asarray(value, dtype=bool)
        if mask.shape != shape:
            raise WrongShape(
                f"{name} must have shape {shape}.", where=f"It has {mask.shape}."
            )
        allowed &= mask if mask.ndim == 2 else mask[:, None]
    s, b = np.nonzero(allowed)
    return s, b


def _semi_major(
    marks: Array,
    s: Indices,
    b: Indices,
    targets: Array,
    joint: Array,
    instrument: TotalStation,
) -> Array:
    """Semi-major standard axis (m, t) of every target from every pair."""
    blocks = joint.reshape(len(marks), 2, len(marks), 2).transpose(0, 2, 1, 3)
    back = marks[b] - marks[s]
    reach2 = np.sum(back * back, axis=1)
    g = np.stack([back[:, 1], -back[:, 0]], axis=1) / reach2[:, None]
    ray = targets[None] - marks[s][:, None]
    v = np.stack([ray[..., 1], -ray[..., 0]], axis=-1)
    # dT = dS + v g'(dB - dS) + ray noise + v e_angle: no rotation is ever formed.
    eye = np.eye(2)
    c_s = blocks[s, s] + instrument.station_centring_m**2 * eye
    c_b = blocks[b, b] + instrument.backsight_centring_m**2 * eye
    c_sb = blocks[s, b]
    spin = np.einsum("mi,mij,mj->m", g, c_s + c_b - c_sb - c_sb.swapaxes(1, 2), g)
    drift = np.einsum("mij,mj->mi", c_sb - c_s, g)
    d2 = np.maximum(np.sum(ray * ray, axis=-1), 1e-12)
    along = instrument.distance_sd_m**2 / d2 + (1e-6 * instrument.distance_ppm) ** 2
    across = spin[:, None] + instrument.angle_sd_rad**2
    e, n, ve, vn = ray[..., 0], ray[..., 1], v[..., 0], v[..., 1]
    de, dn = drift[:, 0, None], drift[:, 1, None]
    extra = instrument.target_centring_m**2
    ee = c_s[:, 0, 0, None] + 2 * ve * de + across * ve * ve + along * e * e + extra
    nn = c_s[:, 1, 1, None] + 2 * vn * dn + across * vn * vn + along * n * n + extra
    en = c_s[:, 0, 1, None] + ve * dn + vn * de + across * ve * vn + along * e * n
    semi = 0.5 * (ee + nn) + np.sqrt((0.5 * (ee - nn)) ** 2 + en * en)
    return np.asarray(np.sqrt(np.where(d2 < NEAREST_M**2, np.inf, semi)))
