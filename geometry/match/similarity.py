"""The similarity that best carries one set of points onto another, outliers aside.

Iteratively reweighted least squares with Tukey's biweight (constant 4.685, scale
from the median distance over 1.1774, the Rayleigh median); Umeyama 1991 and Beaton &
Tukey 1974, from memory. In complex numbers it is one linear fit.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, EmptyInput, WrongShape

_TUKEY = 4.685
_RAYLEIGH = 1.1774
_ROUNDS = 20

NDArrayComplex = NDArray[np.complex128]


@dataclass(frozen=True, slots=True, eq=False)
class Similarity:
    """From `source` to `target`: shift (2,) at `centre` (2,), rotation, scale.

    p -> centre + shift + scale R (p - centre), `rotation_rad` clockwise positive.
    `weights` (n,) are 0 for outliers; `sigma_m` is the robust standard deviation of
    one coordinate. `covariance` (4, 4) is of shift E, shift N (m²), rotation
    (radians) and scale at the centre, from `sigma_m`.
    """

    centre: Array
    shift: Array
    rotation_rad: float
    scale: float
    weights: Array
    sigma_m: float
    residuals: Array
    covariance: Array

    def apply(self, points: ArrayLike) -> Array:
        """Points (n, 2) carried over, metres."""
        local = checked.points("points", points) - self.centre
        return self.centre + self.shift + _carried(local, self.scale, self.rotation_rad)


def fit_similarity(
    source: ArrayLike, target: ArrayLike, *, least_sigma_m: float = 1e-6
) -> Similarity:
    """The robust similarity from points (n, 2) to points (n, 2), E, N in metres.

    >>> square = [(0, 0), (10, 0), (10, 10), (0, 10)]
    >>> fit = fit_similarity(square, [(1, 2), (11, 2), (11, 12), (1, 12)])
    >>> fit.shift.round(9).tolist(), round(fit.scale, 9)
    ([1.0, 2.0], 1.0)

    Raises WrongShape for different counts, EmptyInput for fewer than two points,
    CoincidentPoints when the source points, or those that agree, are one point.
    """
    a, b = checked.points("source", source), checked.points("target", target)
    if a.shape != b.shape:
        raise WrongShape("Source and target must have the same number of points.")
    if len(a) < 2:
        raise EmptyInput("A similarity needs at least two points.")
    centre = a.mean(axis=0)
    p = _complex(a - centre)
    d = _complex(b - centre) - p
    if float(np.abs(p).max()) < 1e-6:
        raise CoincidentPoints("The source points are all the same point.")
    shift, turn, weights, sigma = _fit(p, d, least_sigma_m)
    factor = 1 + turn
    left = d - shift - turn * p
    return Similarity(
        centre=centre,
        shift=np.array([shift.real, shift.imag]),
        rotation_rad=-float(np.angle(factor)),
        scale=float(np.abs(factor)),
        weights=weights,
        sigma_m=sigma,
        residuals=np.column_stack([left.real, left.imag]),
        covariance=_covariance(p, weights, sigma),
    )


def _fit(
    p: NDArrayComplex, d: NDArrayComplex, least: float
) -> tuple[complex, complex, Array, float]:
    weights = np.ones(len(p))
    # medians first, so that a few wild points cannot carry the first fit away
    shift = complex(np.median(d.real), np.median(d.imag))
    turn, sigma = 0j, 0.0
    for round_number in range(_ROUNDS):
        if round_number:
            shift, turn = _weighted(p, d, weights)
        away = np.abs(d - shift - turn * p)
        sigma = max(float(np.median(away)) / _RAYLEIGH, least)
        fresh = np.maximum(1 - (away / (_TUKEY * sigma)) ** 2, 0.0) ** 2
        if round_number and float(np.abs(fresh - weights).max()) < 1e-6:
            break
        weights = fresh
    return shift, turn, weights, sigma


def _weighted(
    p: NDArrayComplex, d: NDArrayComplex, w: Array
) -> tuple[complex, complex]:
    total = float(w.sum())
    mid, mean = (w * p).sum() / total, (w * d).sum() / total
    spread = float((w * np.abs(p - mid) ** 2).sum())
    if spread < 1e-12 * total:
        raise CoincidentPoints(
            "The points that agree are all the same point.",
            do="Shoot marks farther apart.",
        )
    turn = complex((w * np.conj(p - mid) * (d - mean)).sum() / spread)
    return complex(mean - turn * mid), turn


def _covariance(p: NDArrayComplex, w: Array, sigma: float) -> Array:
    """Of shift E, shift N, rotation, scale at the centre (scale near one)."""
    sw = float(w.sum())
    e, n = float((w * p.real).sum()), float((w * p.imag).sum())
    square = float((w * np.abs(p) ** 2).sum())
    normal = np.array(
        [[sw, 0, n, e], [0, sw, -e, n], [n, -e, square, 0], [e, n, 0, square]]
    )
    return np.asarray(sigma**2 * np.linalg.inv(normal))


def _carried(local: Array, scale: float, rotation: float) -> Array:
    turned = _complex(local) * scale * complex(math.cos(rotation), -math.sin(rotation))
    return np.column_stack([turned.real, turned.imag])


def _complex(points: Array) -> NDArrayComplex:
    return points[:, 0] + 1j * points[:, 1]
