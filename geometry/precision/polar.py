"""Predicted precision of a point set by angle and distance from an occupied mark."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.ellipse import Ellipse, ellipse
from geometry.precision.instruments import TotalStation
from geometry.precision.rays import span


@dataclass(frozen=True, slots=True, eq=False)
class Polar:
    """A point set by angle and distance.

    `covariance_m2` (2, 2; E, N) = to_station C_S to_station' + … + `noise_m2`, where
    `to_station` and `to_backsight` (2, 2) say how errors of the two marks carry over
    and `noise_m2` is what the measuring itself adds. `ellipse_95` is its 95 % ellipse.
    """

    covariance_m2: Array
    ellipse_95: Ellipse
    to_station: Array
    to_backsight: Array
    noise_m2: Array
    distance_m: float
    backsight_m: float


def polar(
    station: ArrayLike,
    backsight: ArrayLike,
    target: ArrayLike,
    instrument: TotalStation,
    *,
    station_covariance: ArrayLike | None = None,
    backsight_covariance: ArrayLike | None = None,
    station_backsight_covariance: ArrayLike | None = None,
) -> Polar:
    """Predict the covariance of `target` set from `station` oriented on `backsight`.

    Points (E, N) in metres; covariances (2, 2) in m², `station_backsight_covariance`
    (2, 2) the block E[dS dB']; those left out are zero. General law of error
    propagation with the control correlated (Mikhail & Gracie 1981, from memory):
    dT = (I - d n g') dS + d n g' dB + u e_distance + d n e_angle + centring, with
    g = n_backsight / D. Raises CoincidentPoints, WrongShape, NotFinite, OutOfRange.

    >>> p = polar((0, 0), (0, 200), (0, 100), TotalStation(
    ...     station_centring_m=0, backsight_centring_m=0, target_centring_m=0))
    >>> [round(1000 * float(v) ** 0.5, 3) for v in np.diag(p.covariance_m2)]
    [4.848, 2.01]
    """
    s, b, t = (
        checked.point(name, value)
        for name, value in (
            ("station", station),
            ("backsight", backsight),
            ("target", target),
        )
    )
    c_s = _block("station covariance", station_covariance)
    c_b = _block("backsight covariance", backsight_covariance)
    c_sb = _cross(station_backsight_covariance)
    joint = checked.covariance(
        "joint covariance", np.block([[c_s, c_sb], [c_sb.T, c_b]]), size=4
    )
    to_station, to_backsight, noise, d, reach = _parts(s, b, t, instrument)
    both = np.hstack([to_station, to_backsight])
    total = both @ joint @ both.T + noise
    total = 0.5 * (total + total.T)
    return Polar(total, ellipse(total), to_station, to_backsight, noise, d, reach)


def _parts(
    s: Array, b: Array, t: Array, instrument: TotalStation
) -> tuple[Array, Array, Array, float, float]:
    back, reach = span("station and backsight", s, b)
    ray, d = span("station and target", s, t)
    u = ray / d
    n = np.array([u[1], -u[0]])
    g = np.array([back[1], -back[0]]) / reach**2
    to_backsight = d * np.outer(n, g)
    to_station = np.eye(2) - to_backsight
    noise = (
        instrument.station_centring_m**2 * to_station @ to_station.T
        + instrument.backsight_centring_m**2 * to_backsight @ to_backsight.T
        + instrument.distance_variance(d) * np.outer(u, u)
        + (instrument.angle_sd_rad * d) ** 2 * np.outer(n, n)
        + instrument.target_centring_m**2 * np.eye(2)
    )
    return to_station, to_backsight, noise, d, reach


def _block(name: str, value: ArrayLike | None) -> Array:
    return np.zeros((2, 2)) if value is None else checked.covariance(name, value)


def _cross(value: ArrayLike | None) -> Array:
    if value is None:
        return np.zeros((2, 2))
    return np.reshape(
        checked.numbers("station and backsight covariance", np.ravel(value)), (2, 2)
    )
