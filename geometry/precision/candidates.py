"""Many places at once: free-station precision in closed form.

For a mark at vector d from the instrument, dM = dP + v dw + noise with v = (dN, -dE).
The 2 by 2 weight of each mark comes from its own covariance plus that of the ray, and
everything after is sums over marks of products of a few numbers, so a hundred thousand
places take about a second. Marks are taken as uncorrelated with each other here; the
place chosen is then predicted with the full covariance by `free_station`.
"""

from __future__ import annotations

import numpy as np

from geometry.checked import Array, Flags, Indices
from geometry.precision.instruments import TotalStation

CHUNK = 4096
"""Places worked at a time: their arrays stay in the processor's cache."""

NEAREST_M = 1.5
"""Nearer than this neither focus nor distance meter works (common practice)."""


def normals(
    places: Array,
    marks: Array,
    blocks: Array,
    seen: Flags | None,
    instrument: TotalStation,
) -> tuple[Array, Indices]:
    """Covariance of E, N, w at each place as six numbers (6, n), and sights (n,).

    `places` (n, 2), `marks` (k, 2), `blocks` (k, 3) of EE, EN, NN; `seen` (n, k) bool.
    Order EE, EN, NN, Ew, Nw, ww; not-a-number where the marks do not fix the place.
    """
    e = marks[:, 0] - places[:, 0, None]
    n = marks[:, 1] - places[:, 1, None]
    use = _usable(e, n, seen, instrument)
    vee, ven, vnn = ray_terms(e, n, instrument)
    vee, ven, vnn = vee + blocks[:, 0], ven + blocks[:, 1], vnn + blocks[:, 2]
    scale = use / (vee * vnn - ven * ven)
    wee, wen, wnn = vnn * scale, -ven * scale, vee * scale
    # v = (n, -e): weight times v, then v' W v
    we, wn = wee * n - wen * e, wen * n - wnn * e
    sums = [x.sum(axis=1) for x in (wee, wen, wnn, we, wn, n * we - e * wn)]
    return _inverted(sums), use.sum(axis=1)


def semi_major_squared(
    covariance: Array, places: Array, targets: Array, instrument: TotalStation
) -> Array:
    """Larger eigenvalue of each target's covariance from each place; (n, t), m²."""
    e = targets[:, 0] - places[:, 0, None]
    n = targets[:, 1] - places[:, 1, None]
    cee, cen, cnn, cew, cnw, cww = (row[:, None] for row in covariance)
    tee, ten, tnn = ray_terms(e, n, instrument)
    tee += cee + n * (2 * cew + n * cww)
    tnn += cnn + e * (e * cww - 2 * cnw)
    ten += cen - e * cew + n * cnw - e * n * cww
    half = 0.5 * (tee - tnn)
    return np.asarray(0.5 * (tee + tnn) + np.sqrt(half * half + ten * ten))


def ray_terms(
    e: Array, n: Array, instrument: TotalStation
) -> tuple[Array, Array, Array]:
    """EE, EN, NN of the noise at the end of rays (e, n), station apart; m²."""
    ee, nn = e * e, n * n
    along = instrument.distance_sd_m**2 / np.maximum(ee + nn, 1e-12)
    along += (1e-6 * instrument.distance_ppm) ** 2
    across = instrument.direction_sd_rad**2
    round_ = instrument.target_centring_m**2
    return (
        along * ee + across * nn + round_,
        (along - across) * e * n,
        along * nn + across * ee + round_,
    )


def _usable(e: Array, n: Array, seen: Flags | None, instrument: TotalStation) -> Flags:
    square = e * e + n * n
    use: Flags = (square >= NEAREST_M**2) & (square <= instrument.distance_m**2)
    return use if seen is None else use & seen


def _inverted(sums: list[Array]) -> Array:
    """Inverse of the symmetric 3 by 3 [[a, b, d], [b, c, f], [d, f, g]], many at once.

    The determinant is judged against the product of the diagonal: a place that sees one
    mark, or marks in one spot, has none and becomes not-a-number.
    """
    a, b, c, d, f, g = sums
    caa, cab, cac = c * g - f * f, d * f - b * g, b * f - c * d
    det = a * caa + b * cab + d * cac
    good = det > 1e-12 * a * c * g
    inverse = np.where(good, 1.0, np.nan) / np.where(good, det, 1.0)
    return (
        np.stack([caa, cab, a * g - d * d, cac, b * d - a * f, a * c - b * b]) * inverse
    )
