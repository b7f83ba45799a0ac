"""What was measured, as a surveyor books it: one small frozen object per measurement.

Points are called by name. Lengths are metres on one surface, angles radians; every
measurement carries its own standard deviation. Known values come in groups, because
control that was surveyed together errs together.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import (
    CoincidentPoints,
    EmptyInput,
    NotFinite,
    OutOfRange,
    WrongShape,
)

SMALLEST_SIGMA = 1e-12
"""Metres or radians; nothing is measured better, and squares must not overflow."""


@dataclass(frozen=True, slots=True)
class Distance:
    """A horizontal distance from `start` to `end`, metres.

    >>> str(Distance("A", "B", 25.004, 0.002))
    'distance A to B'
    """

    start: str
    end: str
    value_m: float
    sigma_m: float

    def __str__(self) -> str:
        return f"distance {self.start} to {self.end}"


@dataclass(frozen=True, slots=True)
class Direction:
    """A reading of the horizontal circle at `station` to `target`, radians.

    Readings with the same station and `round_name` share one unknown orientation.
    """

    station: str
    target: str
    value_rad: float
    sigma_rad: float
    round_name: str = "1"

    def __str__(self) -> str:
        return f"direction {self.station} to {self.target}"


@dataclass(frozen=True, slots=True)
class Angle:
    """The clockwise angle at `station` from `backsight` to `foresight`, radians."""

    station: str
    backsight: str
    foresight: str
    value_rad: float
    sigma_rad: float

    def __str__(self) -> str:
        return f"angle {self.backsight}-{self.station}-{self.foresight}"


@dataclass(frozen=True, slots=True)
class Azimuth:
    """The azimuth from `start` to `end`, radians from north clockwise."""

    start: str
    end: str
    value_rad: float
    sigma_rad: float

    def __str__(self) -> str:
        return f"azimuth {self.start} to {self.end}"


@dataclass(frozen=True, slots=True)
class HeightDifference:
    """A levelled rise from `start` to `end`, metres; positive when `end` is higher."""

    start: str
    end: str
    value_m: float
    sigma_m: float

    def __str__(self) -> str:
        return f"levels {self.start} to {self.end}"


PlaneObservation = Distance | Direction | Angle | Azimuth


@dataclass(frozen=True, slots=True, eq=False)
class Coordinates:
    """Known positions of some points with their joint covariance.

    `values_m` has shape (k, 2); `covariance_m2` has shape (2k, 2k) in the order
    E1, N1, E2, N2, and so on, and must be positive definite. A point known without
    any doubt belongs in `fixed` of the adjustment instead.
    """

    names: tuple[str, ...]
    values_m: Array
    covariance_m2: Array


@dataclass(frozen=True, slots=True, eq=False)
class Heights:
    """Known heights of some points with their joint covariance, (k,) and (k, k)."""

    names: tuple[str, ...]
    values_m: Array
    covariance_m2: Array


def coordinates(
    names: Sequence[str], values_m: ArrayLike, sigma_m: float | ArrayLike
) -> Coordinates:
    """Known positions from one sigma for all, or from a joint covariance.

    `sigma_m` is a number (each coordinate by itself, metres) or a (2k, 2k) covariance.

    >>> coordinates(["A"], [[0, 0]], 0.003).covariance_m2.round(9).tolist()
    [[9e-06, 0.0], [0.0, 9e-06]]

    Raises WrongShape, NotFinite, OutOfRange.
    """
    values = checked.points("values_m", values_m)
    joint = _joint(names, sigma_m, len(values), 2)
    return Coordinates(tuple(names), values, joint)


def heights(
    names: Sequence[str], values_m: ArrayLike, sigma_m: float | ArrayLike
) -> Heights:
    """Known heights from one sigma for all (metres), or from a (k, k) covariance.

    >>> heights(["BM1", "BM2"], [100.0, 101.5], 0.002).names
    ('BM1', 'BM2')

    Raises WrongShape, NotFinite, OutOfRange.
    """
    values = checked.numbers("values_m", values_m)
    if float(np.abs(values).max(initial=0.0)) > checked.LARGEST_M:
        raise OutOfRange("A known height is larger than any on Earth.")
    joint = _joint(names, sigma_m, len(values), 1)
    return Heights(tuple(names), values, joint)


def _joint(
    names: Sequence[str], sigma_m: float | ArrayLike, count: int, width: int
) -> Array:
    if len(names) != count:
        raise WrongShape(
            "There must be one name for each known point.",
            where=f"There are {len(names)} names and {count} values.",
        )
    if not count:
        raise EmptyInput("A group of known points has no point in it.")
    if len(set(names)) != len(names):
        raise OutOfRange("A name stands twice in one group of known points.")
    given = np.asarray(sigma_m, dtype=np.float64)
    if given.ndim == 0:
        sigma = checked.positive("sigma_m", float(given))
        return sigma**2 * np.eye(width * count)
    return checked.covariance("covariance", given, width * count)


def check_measurement(
    one: PlaneObservation | HeightDifference,
    ends: tuple[str, ...],
    value: float,
    sigma: float,
) -> None:
    """Refuse a measurement that no adjustment could use, naming it."""
    if not (math.isfinite(value) and math.isfinite(sigma)):
        raise NotFinite(
            "A measurement is missing or not finite.",
            where=f"It is the {one}.",
            do="Fill in the value and its standard deviation, or leave it out.",
        )
    if abs(value) > checked.LARGEST_M:
        raise OutOfRange(
            "A measurement is larger than any on Earth.",
            where=f"It is the {one}.",
            do="Check its unit.",
        )
    if not SMALLEST_SIGMA <= sigma <= checked.LARGEST_M:
        raise OutOfRange(
            "A standard deviation must be greater than zero.",
            where=f"It belongs to the {one}.",
            do="Give the precision of the instrument; hold a point fixed instead.",
        )
    if len(set(ends)) != len(ends):
        raise CoincidentPoints(
            "A measurement needs different points at its ends.",
            where=f"It is the {one}.",
        )
