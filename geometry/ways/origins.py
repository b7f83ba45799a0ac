"""Origins of setups and of what was measured from them, for a lineage."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.errors import OutOfRange
from geometry.precision import FreeStation, TotalStation
from geometry.precision.rays import ray_noise, span, turned
from geometry.ways.lineage import Origin
from geometry.ways.way import Way


def control_origin(name: str, covariance_m2: ArrayLike) -> Origin:
    """A root: control with the covariance of its adopted value.

    Control adjusted together is correlated: give it a common parent (for instance a
    datum with the identity as Jacobian) and only the relative part as its own.
    """
    return Origin(
        name, (), checked.covariance("covariance", covariance_m2), control=True
    )


def occupied_setup(
    name: str,
    station_id: str,
    backsight_id: str,
    station: ArrayLike,
    backsight: ArrayLike,
    instrument: TotalStation,
) -> Origin:
    """A total station on a mark, oriented on another: errors of E, N, orientation."""
    s, b = checked.point("station", station), checked.point("backsight", backsight)
    vector, reach = span("station and backsight", s, b)
    g = turned(vector) / reach**2
    to_station = np.vstack([np.eye(2), -g])
    to_backsight = np.vstack([np.zeros((2, 2)), g])
    noise = instrument.station_centring_m**2 * to_station @ to_station.T
    noise[2, 2] += instrument.backsight_centring_m**2 / reach**2
    noise[2, 2] += instrument.direction_sd_rad**2
    return Origin(name, ((station_id, to_station), (backsight_id, to_backsight)), noise)


def free_setup(name: str, mark_ids: Sequence[str], free: FreeStation) -> Origin:
    """A free station solved from `mark_ids`, in the order it was predicted with."""
    parents = tuple(
        (mark, free.gain[:, 2 * i : 2 * i + 2]) for i, mark in enumerate(mark_ids)
    )
    return Origin(name, parents, free.noise)


def shot(
    name: str,
    setup: str,
    station: ArrayLike,
    target: ArrayLike,
    instrument: TotalStation,
) -> Origin:
    """A mark set or measured by one ray from a setup: stakes of one setup share it."""
    vector, _ = span(
        "station and target",
        checked.point("station", station),
        checked.point("target", target),
    )
    reach = np.column_stack([np.eye(2), turned(vector)])
    return Origin(name, ((setup, reach),), ray_noise(vector, instrument))


def put_back(way: Way, name: str | None = None) -> Origin:
    """The origin of a mark put back by `way`: its parents' errors and its own.

    Raises OutOfRange for a way that was refused, or that gives an elevation only.
    """
    if not way.offered or way.component != "position":
        raise OutOfRange(
            "Only a way that was offered for a position leaves an origin.",
            where=f"{way.target} by {way.kind}.",
        )
    return Origin(name or way.target, way.to_marks, way.noise_m2)
