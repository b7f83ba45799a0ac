"""How probable it is that the true value lies within the tolerance."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(160)


def conformance(
    difference: float,
    tolerance: float,
    uncertainty: float,
    *,
    tolerance_below: float | None = None,
) -> float:
    """Probability that the true difference lies within the tolerance, 0 to 1.

    Phi((T - d) / u) - Phi((-T - d) / u), the conformance probability of JCGM 106:2012
    (from memory) with no other knowledge of the true value. All lengths in one unit.
    Raises NotFinite, OutOfRange.

    >>> round(conformance(4, 6, 1.5), 5)
    0.90879
    """
    d = checked.number("difference", difference)
    high = checked.positive("tolerance", tolerance)
    low = high if tolerance_below is None else tolerance_below
    low = checked.positive("tolerance below", low)
    u = checked.not_negative("uncertainty", uncertainty)
    if u == 0:
        return 1.0 if -low <= d <= high else 0.0
    return _phi((high - d) / u) - _phi((-low - d) / u)


def conformance_radial(
    difference: ArrayLike, tolerance: float, covariance: ArrayLike
) -> float:
    """Probability that a position lies within `tolerance` of where it should be.

    `difference` (dE, dN), `covariance` (2, 2) of it, all in one unit of length. For a
    round covariance this is the noncentral chi-square distribution with 2 degrees of
    freedom; for any other, the normal density is integrated over the circle by
    Gauss-Legendre along the major axis of the ellipse, in closed form across it.
    Raises WrongShape, NotFinite, OutOfRange.

    >>> import numpy as np
    >>> round(conformance_radial((6, 0), 10, 4 * np.eye(2)), 6)
    0.969322
    """
    d = checked.point("difference", difference)
    limit = checked.positive("tolerance", tolerance)
    values, axes = np.linalg.eigh(checked.covariance("covariance", covariance))
    spread = np.sqrt(np.clip(values, 0.0, None))
    across, along = (float(x) for x in axes.T @ d)
    narrow, wide = (float(x) for x in spread)
    if wide == 0:
        return 1.0 if float(np.hypot(across, along)) <= limit else 0.0
    low, high = max(-limit, along - 9 * wide), min(limit, along + 9 * wide)
    if low >= high:
        return 0.0
    start, end = math.asin(low / limit), math.asin(high / limit)
    angle = (start + end) / 2 + (end - start) / 2 * _NODES
    x, half = limit * np.sin(angle), limit * np.cos(angle)
    density = np.exp(-0.5 * ((x - along) / wide) ** 2) / (wide * math.sqrt(2 * math.pi))
    inside = _between(across, half, narrow)
    return min(float((end - start) / 2 * np.sum(_WEIGHTS * density * inside * half)), 1)


def _between(mean: float, half: Array, spread: float) -> Array:
    if spread == 0:
        return np.asarray(np.abs(mean) <= half, dtype=np.float64)
    upper, lower = (half - mean) / spread, (-half - mean) / spread
    return np.array([_phi(a) - _phi(b) for a, b in zip(upper, lower, strict=True)])


def _phi(z: float) -> float:
    return 0.5 * math.erfc(-z / math.sqrt(2.0))
