"""The setup whose work is judged, with the precision its measurements have.

Its control mark and its orientation are never perfect: both are common to all its
shots, so they enter as random effects. Without them two hundred shots "prove" a
shift of a millimetre that only is the mark's own uncertainty.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, OutOfRange


class Role(StrEnum):
    """Whether the setup staked the points, or shot them afterwards."""

    STAKED = "staked"
    SHOT = "shot"


@dataclass(frozen=True, slots=True, eq=False)
class Setup:
    """A total station on a mark; see `setup` for the meaning of each number."""

    at: Array
    backsight: Array | None
    role: Role
    name: str
    distance_m: float
    distance_ppm: float
    direction_rad: float
    control_m: float
    orientation_rad: float


def setup(
    at: ArrayLike,
    backsight: ArrayLike | None = None,
    *,
    role: Role = Role.SHOT,
    name: str = "",
    distance_m: float = 0.002,
    distance_ppm: float = 2.0,
    direction_rad: float = math.radians(7 / 3600),
    control_m: float = 0.003,
    orientation_rad: float = math.radians(10 / 3600),
) -> Setup:
    """A setup at E, N (metres), oriented on `backsight` where that is known.

    Standard deviations: `distance_m` + `distance_ppm` of a distance, `direction_rad`
    of one pointing, `control_m` of each coordinate of the occupied mark,
    `orientation_rad` of the orientation. Firms replace the defaults by their own.

    Raises NotFinite, WrongShape, OutOfRange for a negative precision,
    CoincidentPoints when station and backsight are one point.
    """
    place = checked.point("The station", at)
    back = None if backsight is None else checked.point("The backsight", backsight)
    if back is not None and float(np.hypot(*(back - place))) < 1e-3:
        raise CoincidentPoints("Station and backsight are the same point.")
    numbers = (distance_m, distance_ppm, direction_rad, control_m, orientation_rad)
    if any(checked.number("A precision", value) < 0 for value in numbers):
        raise OutOfRange("A precision is negative.", do="Give standard deviations.")
    return Setup(place, back, role, name, *(float(value) for value in numbers))


@dataclass(frozen=True, slots=True, eq=False)
class Rays:
    """From a setup to points (n, 2): lengths (n,), along and across unit (n, 2)."""

    length_m: Array
    along: Array
    across: Array


def rays(station: Array, points: Array) -> Rays:
    """Rays to points; one on the station itself has no direction and gets north."""
    d = points - station
    length = np.hypot(d[:, 0], d[:, 1])
    safe = np.where(length > 1e-9, length, 1.0)
    along = np.where(length[:, None] > 1e-9, d / safe[:, None], [0.0, 1.0])
    across = np.column_stack([along[:, 1], -along[:, 0]])
    return Rays(length, along, across)


def noise(setups: tuple[Setup, ...], points: Array, point_m: float) -> Array:
    """Covariance blocks (n, 2, 2) of the shots, random effects left out; m²."""
    blocks = np.broadcast_to(point_m**2 * np.eye(2), (len(points), 2, 2)).copy()
    for one in setups:
        r = rays(one.at, points)
        along = one.distance_m**2 + (one.distance_ppm * 1e-6 * r.length_m) ** 2
        across = (one.direction_rad * r.length_m) ** 2
        blocks += along[:, None, None] * (r.along[:, :, None] * r.along[:, None, :])
        blocks += across[:, None, None] * (r.across[:, :, None] * r.across[:, None, :])
    return blocks


def effects(
    setups: tuple[Setup, ...], points: Array, common_m: float
) -> tuple[Array, Array]:
    """Random effects common to all shots: fields (n, 2, m), variances (m,).

    `common_m` is a common shift not owed to a setup (a localisation, a datum).
    """
    shift = common_m**2 + sum(one.control_m**2 for one in setups)
    fields, variances = [np.broadcast_to(np.eye(2), (len(points), 2, 2))], [shift] * 2
    for one in setups:
        r = rays(one.at, points)
        fields.append((r.across * r.length_m[:, None])[:, :, None])
        variances.append(one.orientation_rad**2)
    kept = [v > 0 for v in variances]
    return np.concatenate(fields, axis=2)[:, :, kept], np.array(variances)[kept]
