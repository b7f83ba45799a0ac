"""What one measured ray contributes: its covariance, and how it turns a point."""

from __future__ import annotations

import math

import numpy as np

from geometry.checked import Array
from geometry.errors import CoincidentPoints
from geometry.precision.instruments import TotalStation

SHORTEST_M = 1e-6
"""Two marks nearer than a thousandth of a millimetre are the same mark."""


def span(name: str, start: Array, end: Array) -> tuple[Array, float]:
    """Vector from `start` to `end` and its length; CoincidentPoints when it is zero."""
    vector = end - start
    length = math.hypot(float(vector[0]), float(vector[1]))
    if length < SHORTEST_M:
        raise CoincidentPoints(
            f"{name} are the same point.", do="Choose two marks that lie apart."
        )
    return vector, length


def turned(vector: Array) -> Array:
    """Change of `vector` (…, 2) per radian clockwise: (dN, -dE)."""
    return np.stack([vector[..., 1], -vector[..., 0]], axis=-1)


def ray_noise(vector: Array, instrument: TotalStation) -> Array:
    """Covariance (…, 2, 2) of a point at the end of one measured ray, station apart.

    Distance along the ray, direction across it, centring of the target all round; m².
    """
    square = np.sum(vector * vector, axis=-1)
    along = instrument.distance_sd_m**2 / square + (1e-6 * instrument.distance_ppm) ** 2
    across = turned(vector)
    return np.asarray(
        along[..., None, None] * vector[..., :, None] * vector[..., None, :]
        + instrument.direction_sd_rad**2 * across[..., :, None] * across[..., None, :]
        + instrument.target_centring_m**2 * np.eye(2)
    )
