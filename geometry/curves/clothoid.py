"""The path of linearly changing curvature: line, arc and spiral in one formula.

Curvature runs from k0 to k1 over a length; turning right is positive, as azimuths
grow clockwise. Lines and arcs are closed forms; a spiral is integrated by 12-point
Gauss-Legendre, exact to 1e-12 of the length up to about 6 radians of turn, and in
panels beyond. Published in route-surveying texts (Hickerson; Meyer & Gibson; from
memory) and checked against the Fresnel integrals.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry.checked import Array
from geometry.errors import NotFinite

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
_TURN_OF_A_PANEL = 6.0
_NO_LENGTH_M = 1e-9


@dataclass(frozen=True, slots=True)
class Path:
    """Where a path has got to, in the frame of its start; metres and radians."""

    along_m: Array
    right_m: Array
    turn_rad: Array


def path(
    curvature_start: ArrayLike,
    curvature_end: ArrayLike,
    length_m: ArrayLike,
    at_m: ArrayLike,
) -> Path:
    """The path after `at_m` metres of an element of `length_m`; arrays broadcast.

    Curvatures in 1/m, right positive. `at_m` is not limited to the length. Raises
    NotFinite for a number that is missing or infinite.

    >>> end = path(0.0, 1 / 150, 60.0, 60.0)
    >>> round(float(end.along_m), 8), round(float(end.right_m), 8)
    (59.76044403, 3.98858596)
    """
    k0, k1, length, s = np.broadcast_arrays(
        *(
            np.asarray(a, np.float64)
            for a in (curvature_start, curvature_end, length_m, at_m)
        )
    )
    if not all(np.isfinite(a).all() for a in (k0, k1, length, s)):
        raise NotFinite(
            "A curvature, a length or a distance along the path is not finite.",
            do="Check the radii and lengths; a straight line has curvature 0.",
        )
    rate = np.zeros_like(s)
    # an element of no length has no room to bend in
    np.divide(k1 - k0, length, out=rate, where=(k1 != k0) & (length > _NO_LENGTH_M))
    turn = s * (k0 + 0.5 * rate * s)
    along, right = _arc(turn, s)
    bent = rate != 0
    if np.any(bent):
        along, right = np.array(along), np.array(right)
        along[bent], right[bent] = _spiral(k0[bent], rate[bent], s[bent])
    return Path(along, right, turn)


def _arc(turn: Array, s: Array) -> tuple[Array, Array]:
    half = 0.5 * turn
    chord = s * np.sinc(half / math.pi)
    return chord * np.cos(half), chord * np.sin(half)


def _spiral(k0: Array, rate: Array, s: Array) -> tuple[Array, Array]:
    sharpest = np.maximum(np.abs(k0), np.abs(k0 + rate * s)) * np.abs(s)
    panels = max(1, math.ceil(float(sharpest.max(initial=0.0)) / _TURN_OF_A_PANEL))
    along, right = np.zeros_like(s), np.zeros_like(s)
    for panel in range(panels):
        for node, weight in zip(_NODES, _WEIGHTS, strict=True):
            t = s * ((panel + 0.5 * (node + 1.0)) / panels)
            turn = t * (k0 + 0.5 * rate * t)
            along += weight * np.cos(turn)
            right += weight * np.sin(turn)
    half = s / (2 * panels)
    return along * half, right * half
