"""Arrays at the door of a computation: right shape and finite, or a named error."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry.errors import NotFinite, OutOfRange, WrongShape

Array = NDArray[np.float64]
"""Float64 array; shapes stand in each docstring."""

SMALLEST_SIGMA_M, LARGEST_SIGMA_M = 1e-9, 1e6

Flags = NDArray[np.bool_]
Indices = NDArray[np.intp]

LARGEST_M = 1e8
"""No coordinate on Earth, in any plane frame in use, is farther from its origin."""


def points(name: str, values: ArrayLike) -> Array:
    """`values` as an (n, 2) float64 array of E, N in metres, all finite."""
    array = np.asarray(values, dtype=np.float64)
    if array.size == 0:
        array = array.reshape(0, 2)
    if array.ndim != 2 or array.shape[1] != 2:
        raise WrongShape(
            f"{name} must be rows of easting and northing, shape (n, 2).",
            where=f"It has shape {array.shape}.",
            do="Give one row of two numbers per point.",
        )
    return _finite(name, array)


def point(name: str, values: ArrayLike) -> Array:
    """`values` as a (2,) float64 array of E, N in metres, finite."""
    array = np.asarray(values, dtype=np.float64)
    if array.shape != (2,):
        raise WrongShape(
            f"{name} must be one easting and one northing.",
            where=f"It has shape {array.shape}.",
            do="Give two numbers.",
        )
    return _finite(name, array)


def numbers(name: str, values: ArrayLike) -> Array:
    """`values` as an (n,) float64 array, all finite."""
    array = np.atleast_1d(np.asarray(values, dtype=np.float64))
    if array.ndim != 1:
        raise WrongShape(
            f"{name} must be a list of numbers.", where=f"It has shape {array.shape}."
        )
    return _finite(name, array, limit=np.inf)


def number(name: str, value: float) -> float:
    """`value` as a finite float."""
    result = float(value)
    if not np.isfinite(result):
        raise NotFinite(f"{name} is not a finite number.", do=f"Give {name} a number.")
    return result


def positive(name: str, value: float) -> float:
    """`value` as a finite float greater than zero."""
    result = number(name, value)
    if result <= 0:
        raise OutOfRange(
            f"{name} must be greater than zero.", where=f"It is {result:g}."
        )
    return result


def not_negative(name: str, value: float) -> float:
    """`value` as a finite float of zero or more."""
    result = number(name, value)
    if result < 0:
        raise OutOfRange(f"{name} must not be negative.", where=f"It is {result:g}.")
    return result


def metres(name: str, value: float) -> float:
    """`value` as a finite number of metres, no larger than any plane coordinate."""
    result = number(name, value)
    if abs(result) > LARGEST_M:
        raise OutOfRange(
            f"{name} is larger than any plane coordinate.",
            where=f"It is {result:g}.",
            do="Check the unit.",
        )
    return result


def length(name: str, value: float) -> float:
    """`value` as metres greater than zero."""
    return metres(name, positive(name, value))


def sigma(name: str, value: float) -> float:
    """`value` as a standard deviation that a measurement can have, in metres."""
    result = positive(name, value)
    if not SMALLEST_SIGMA_M <= result <= LARGEST_SIGMA_M:
        raise OutOfRange(
            f"{name} is no standard deviation of a measurement.",
            where=f"It is {result:g} m.",
            do="Give a value between a nanometre and a thousand kilometres.",
        )
    return result


def covariance(name: str, values: ArrayLike, size: int = 2) -> Array:
    """`values` as a symmetric (size, size) covariance in m², not negative."""
    array = np.asarray(values, dtype=np.float64)
    if array.shape != (size, size):
        raise WrongShape(
            f"{name} must be a {size} by {size} covariance.",
            where=f"It has shape {array.shape}.",
        )
    _finite(name, array, limit=LARGEST_M**2)
    scale = max(float(np.abs(array).max()), 1e-30)
    if float(np.abs(array - array.T).max()) > 1e-9 * scale:
        raise OutOfRange(f"{name} is not symmetric.", do="Give one covariance matrix.")
    if float(np.linalg.eigvalsh(array).min()) < -1e-9 * scale:
        raise OutOfRange(
            f"{name} is not a covariance: it has a negative direction.",
            do="Check the standard deviations and correlations it was made from.",
        )
    return 0.5 * (array + array.T)


def _finite(name: str, array: Array, limit: float = LARGEST_M) -> Array:
    bad = ~np.isfinite(array)
    if bad.any():
        row = int(np.argwhere(bad)[0][0])
        raise NotFinite(
            f"{name} holds a value that is missing or not finite.",
            where=f"It is in row {row + 1}.",
            do="Fill in the value or leave the row out.",
        )
    if array.size and float(np.abs(array).max()) > limit:
        row = int(np.argwhere(np.abs(array) > limit)[0][0])
        raise OutOfRange(
            f"{name} holds a value larger than any plane coordinate.",
            where=f"It is in row {row + 1}.",
            do="Check the unit and the frame.",
        )
    return array
