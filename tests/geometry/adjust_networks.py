"""A small network with every kind of measurement, for tests of adjustments."""

from __future__ import annotations

import math

import numpy as np

from geometry.adjust import Angle, Azimuth, Direction, Distance, coordinates


def network(rng, count=7, noise=1.0):
    """A round of points, all kinds of measurement, control with full covariance."""
    turn = np.linspace(0, 2 * math.pi, count, endpoint=False)
    true = np.stack([80 * np.cos(turn), 60 * np.sin(turn)], 1)
    true += rng.normal(0, 8, true.shape)
    names = [f"P{i}" for i in range(count)]
    at = dict(zip(names, true, strict=True))
    booked = []
    for a in names:
        circle = rng.uniform(0, 2 * math.pi)
        others = [n for n in names if n != a]
        for b in rng.permutation(others)[:4]:
            d = at[b] - at[a]
            azimuth = math.atan2(*d)
            length = math.hypot(*d) + noise * rng.normal(0, 2e-3)
            booked.append(Distance(a, str(b), length, 2e-3))
            reading = azimuth - circle + noise * rng.normal(0, 2e-5)
            booked.append(Direction(a, str(b), reading, 2e-5))
        d, e = at[others[0]] - at[a], at[others[1]] - at[a]
        angle = math.atan2(*e) - math.atan2(*d) + noise * rng.normal(0, 3e-5)
        booked.append(Angle(a, others[0], others[1], angle % (2 * math.pi), 3e-5))
    d = at["P3"] - at["P0"]
    booked.append(
        Azimuth("P0", "P3", math.atan2(*d) + noise * rng.normal(0, 5e-5), 5e-5)
    )
    half = rng.normal(0, 2e-3, (6, 6))
    joint = half @ half.T + 1e-6 * np.eye(6)
    error = noise * np.linalg.cholesky(joint) @ rng.normal(size=6)
    known = coordinates(names[:3], true[:3] + error.reshape(3, 2), joint)
    return names, at, booked, known
