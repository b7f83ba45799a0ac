"""Where one more mark would cure most: fragile marks made safe, per place tried."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Indices
from geometry.precision import Obstacle
from geometry.survive.losses import Survivability, survivability
from geometry.survive.routes import Routes, routes_among
from geometry.survive.stand import Stand
from geometry.ways import Limits


@dataclass(frozen=True, slots=True)
class Extra:
    """A mark at `position` (E, N) would bring the marks `cured` to the margin wanted,
    and `helped` others at least one step."""

    position: tuple[float, float]
    cured: tuple[int, ...]
    helped: tuple[int, ...]


def best_extra(
    marks: Stand,
    routes: Routes,
    now: Survivability,
    places: ArrayLike,
    covariance_m2: ArrayLike,
    *,
    wanted: int = 2,
    occupiable: bool = True,
    obstacles: tuple[Obstacle, ...] = (),
    limits: Limits | None = None,
) -> tuple[Extra, ...]:
    """Try one more mark at each of `places` (m, 2), best first; only those that help.

    A target is fragile when its margin is below `wanted` (2: any one more loss is
    survived). The new mark has `covariance_m2` (2, 2) and may be occupied or not.
    Raises WrongShape, NotFinite, OutOfRange.
    """
    spots = checked.points("places", places)
    own = checked.covariance("covariance", covariance_m2)
    fragile = np.flatnonzero(now.margin < wanted)
    reach = _reach(marks, occupiable)
    found = []
    for spot in spots:
        gap = marks.xy[routes.targets[fragile]] - spot
        away = np.hypot(*gap.T)
        near = fragile[(away <= reach) & (away > 0.05)]
        if len(near):
            margin = _with(
                marks, routes, near, spot, own, occupiable, obstacles, limits
            )
            better = margin > now.margin[near]
            cured = near[better & (margin >= wanted)]
            helped = near[better & (margin < wanted)]
            if len(cured) or len(helped):
                found.append(
                    Extra(
                        (float(spot[0]), float(spot[1])),
                        tuple(routes.targets[cured].tolist()),
                        tuple(routes.targets[helped].tolist()),
                    )
                )
    return tuple(sorted(found, key=lambda x: (-len(x.cured), -len(x.helped))))


def _with(
    marks: Stand,
    routes: Routes,
    rows: Indices,
    spot: Array,
    own: Array,
    occupiable: bool,
    obstacles: tuple[Obstacle, ...],
    limits: Limits | None,
) -> Indices:
    """Margins of the targets `rows` with one more mark at `spot`."""
    more = replace(
        marks,
        xy=np.vstack([marks.xy, spot]),
        own=np.vstack([marks.own, [own[0, 0], own[0, 1], own[1, 1]]]),
        tolerance=np.append(marks.tolerance, 1.0),
        usable=np.append(marks.usable, True),
        occupiable=np.append(marks.occupiable, occupiable),
        control=np.append(marks.control, False),
    )
    near = np.column_stack([routes.near[rows], np.full(len(rows), len(marks))])
    fresh = routes_among(
        more, routes.targets[rows], near, obstacles=obstacles, limits=limits
    )
    return survivability(fresh).margin


def _reach(marks: Stand, occupiable: bool) -> float:
    tape, station = marks.tools.tape, marks.tools.total_station
    reach = 0.0 if tape is None else tape.length_m
    if station is not None and occupiable:
        # A station farther off than this sees more, but helps as any control does.
        reach = max(reach, min(station.distance_m, 100.0))
    return reach
