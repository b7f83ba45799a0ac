"""Error ellipses of a 2x2 covariance, and the factors that go with them.

Published in Mikhail & Gracie, *Analysis and Adjustment of Survey Measurements* (1981),
and Ghilani, *Adjustment Computations*; quantiles are of the chi-square distribution.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry import checked
from geometry.checked import Array

FACTOR_95_2D = math.sqrt(-2.0 * math.log(0.05))
"""2.447747: half-axes of the 95 % ellipse over those of the standard ellipse."""


@dataclass(frozen=True, slots=True)
class Ellipse:
    """Half-axes in metres and the azimuth of the longer one, radians in [0, pi)."""

    semi_major_m: float
    semi_minor_m: float
    azimuth_rad: float


def ellipse(covariance_m2: Array, factor: float = FACTOR_95_2D) -> Ellipse:
    """The ellipse of a 2x2 covariance (E, N; m²), by default the 95 % one.

    >>> import numpy as np
    >>> e = ellipse(np.diag([4e-6, 1e-6]), factor=1.0)
    >>> round(e.semi_major_m, 6), round(e.semi_minor_m, 6), round(e.azimuth_rad, 6)
    (0.002, 0.001, 1.570796)

    Raises WrongShape, NotFinite or OutOfRange when it is not a covariance.
    """
    c = checked.covariance("covariance", covariance_m2)
    ee, en, nn = float(c[0, 0]), float(c[0, 1]), float(c[1, 1])
    mean, half = (ee + nn) / 2, math.hypot((ee - nn) / 2, en)
    azimuth = 0.5 * math.atan2(2 * en, nn - ee)
    return Ellipse(
        semi_major_m=factor * math.sqrt(max(mean + half, 0.0)),
        semi_minor_m=factor * math.sqrt(max(mean - half, 0.0)),
        azimuth_rad=azimuth % math.pi,
    )
