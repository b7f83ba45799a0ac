"""Centring errors, folded into the sigmas of the measurements they spoil."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike

from geometry.adjust.observations import (
    Angle,
    Azimuth,
    Direction,
    Distance,
    PlaneObservation,
)
from geometry.checked import Array


def allow_for_centring(
    observations: Sequence[PlaneObservation],
    points: Mapping[str, ArrayLike],
    *,
    instrument_m: float,
    target_m: float,
) -> tuple[PlaneObservation, ...]:
    """The same measurements with sigmas widened by centring, metres per axis.

    An instrument or target off its mark acts like a mark that moved; without this a
    search for moved marks finds the tripods. Errors that several measurements of one
    setup share are treated as independent, which is on the safe side for distances
    and slightly so for directions.

    Published: Ghilani, *Adjustment Computations*, ch. 7 (from memory).

    >>> turned = [Direction("A", "B", 0.0, 2e-5)]
    >>> at = {"A": (0, 0), "B": (0, 100)}
    >>> (wide,) = allow_for_centring(turned, at, instrument_m=0.001, target_m=0.001)
    >>> round(wide.sigma_rad * 1e5, 3)
    2.449
    """
    where = {name: np.asarray(p, dtype=np.float64) for name, p in points.items()}
    return tuple(_widened(o, where, instrument_m, target_m) for o in observations)


def _widened(
    one: PlaneObservation, at: Mapping[str, Array], instrument: float, target: float
) -> PlaneObservation:
    if isinstance(one, Distance):
        return replace(one, sigma_m=math.hypot(one.sigma_m, instrument, target))
    if isinstance(one, Angle):
        sigma = _angle_sigma(one, at, instrument, target)
        return replace(one, sigma_rad=math.hypot(one.sigma_rad, sigma))
    ends = _ends(one)
    across = math.hypot(instrument, target) / math.dist(at[ends[0]], at[ends[1]])
    return replace(one, sigma_rad=math.hypot(one.sigma_rad, across))


def _ends(one: Direction | Azimuth) -> tuple[str, str]:
    if isinstance(one, Direction):
        return one.station, one.target
    return one.start, one.end


def _angle_sigma(
    one: Angle, at: Mapping[str, Array], instrument: float, target: float
) -> float:
    """Targets act by their distances, the instrument by the line between them."""
    here, back, fore = at[one.station], at[one.backsight], at[one.foresight]
    d1, d2 = math.dist(here, back), math.dist(here, fore)
    by_targets = target * math.hypot(1 / d1, 1 / d2)
    by_instrument = instrument * math.dist(back, fore) / (d1 * d2)
    return math.hypot(by_targets, by_instrument)
