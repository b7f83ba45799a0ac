"""Ways with a total station set up anywhere: free station, best fit of survivors.

Both fit a shift and a turn, scale held at 1, to marks sighted from one place; the free
station rests on control, the best fit on the stakes around the lost one. A place to
stand is looked for in rings around the target.
"""

from __future__ import annotations

import math

import numpy as np

from geometry.checked import Array, Flags
from geometry.precision import (
    TotalStation,
    best_setup,
    clear_lines,
    free_station,
    inside_any,
    sighted,
)
from geometry.precision.setting_out import azimuth
from geometry.ways.draft import Draft, singular
from geometry.ways.scene import Scene
from geometry.ways.way import Caution, Check, Kind, Number

SIGHTED = 8
"""Marks sighted at most: more cost time and add little."""

RINGS_M = (6.0, 15.0, 30.0, 50.0)


def free_stations(scene: Scene) -> list[Draft]:
    """A free station on the control in reach, and one with the unusable marks too."""
    return _both(scene, Kind.FREE_STATION, scene.control, 2)


def best_fits(scene: Scene) -> list[Draft]:
    """All near stakes fitted to their recorded places, and the target set from them."""
    near = ~scene.control & (scene.away <= 100.0)
    return _both(scene, Kind.BEST_FIT, near, 3)


def _both(scene: Scene, kind: Kind, wanted: Flags, least: int) -> list[Draft]:
    instrument = scene.tools.total_station
    if instrument is None:
        return []
    reach = wanted & (scene.away <= instrument.distance_m)
    good = np.flatnonzero(reach & scene.usable)
    every = np.flatnonzero(reach)
    found = []
    if len(good) >= least:
        found.append(_placed(scene, instrument, kind, good[:SIGHTED].tolist()))
        sound = [i for i in good.tolist() if scene.trusted[i]]
        if least <= len(sound) < len(good):
            found.append(_placed(scene, instrument, kind, sound[:SIGHTED]))
    elif len(every) >= least:
        found.append(_placed(scene, instrument, kind, every[:SIGHTED].tolist()))
    return found


def _placed(
    scene: Scene, instrument: TotalStation, kind: Kind, marks: list[int]
) -> Draft:
    places = _places(scene)
    if not len(places):
        return singular(kind, "No place to stand was found around it.", tuple(marks))
    seen = np.ones((len(places), len(marks) + 1), dtype=bool)
    if scene.obstacles:
        ends = np.vstack([scene.xy[marks], scene.place])
        seen = clear_lines(
            np.repeat(places, len(ends), axis=0),
            np.tile(ends, (len(places), 1)),
            scene.obstacles,
        ).reshape(len(places), -1)
    blocks = np.array([scene.block(i, i) for i in marks])
    for needed in (3, 2) if kind is Kind.FREE_STATION else (3,):
        setups = best_setup(
            places,
            scene.xy[marks],
            scene.place[None],
            scene.target.tolerance_m,
            instrument,
            blocks,
            marks_seen=seen[:, :-1],
            targets_seen=seen[:, -1:],
            marks_needed=needed,
        )
        if setups.best is not None:
            break
    if setups.best is None:
        return singular(
            kind, "No place around it sees the point and the marks.", tuple(marks)
        )
    row = seen[setups.best, :-1]
    used = [i for i, in_sight in zip(marks, row, strict=True) if in_sight]
    return _draft(scene, instrument, kind, used, places[setups.best])


def _places(scene: Scene) -> Array:
    angle = np.arange(12) * math.pi / 6 + 0.2
    ring = np.column_stack([np.sin(angle), np.cos(angle)])
    places = scene.place + np.vstack([r * ring for r in RINGS_M])
    gap = places[:, None] - scene.xy[None]
    free = (np.hypot(gap[..., 0], gap[..., 1]) > 1.5).all(axis=1)
    return np.asarray(places[free & ~inside_any(places, scene.obstacles)])


def _draft(
    scene: Scene,
    instrument: TotalStation,
    kind: Kind,
    marks: list[int],
    stand: Array,
) -> Draft:
    rows = np.ravel([(2 * i, 2 * i + 1) for i in marks])
    free = free_station(
        stand, scene.xy[marks], instrument, scene.joint[np.ix_(rows, rows)]
    )
    point = sighted(free, scene.place, instrument)
    jacobians = tuple(point.to_marks[:, 2 * i : 2 * i + 2] for i in range(len(marks)))
    zero = azimuth(stand, scene.xy[marks[0]])
    numbers = [
        Number("stand near, east", float(stand[0]), "m", "station", ""),
        Number("stand near, north", float(stand[1]), "m", "station", ""),
    ]
    for i in marks:
        turn = (azimuth(stand, scene.xy[i]) - zero) % (2 * math.pi)
        name = scene.marks[i].id
        numbers += [
            Number("sight, angle right", turn, "rad", "station", name, "about"),
            Number(
                "sight, distance",
                math.dist(stand, scene.xy[i]),
                "m",
                "station",
                name,
                "about",
            ),
        ]
    turn = (azimuth(stand, scene.place) - zero) % (2 * math.pi)
    numbers += [
        Number("angle right", turn, "rad", "station", scene.target.id, "about"),
        Number(
            "distance",
            math.dist(stand, scene.place),
            "m",
            "station",
            scene.target.id,
            "about",
        ),
    ]
    return Draft(
        kind,
        tuple(marks),
        jacobians,
        point.noise_m2,
        tuple(numbers),
        tuple(_cautions(scene, marks, stand)),
        12.0 + 2.0 * len(marks),
        own_check=_residuals(scene, free.smallest_moves_m, free.covariance),
        stand_at=(float(stand[0]), float(stand[1])),
    )


def _cautions(scene: Scene, marks: list[int], stand: Array) -> list[Caution]:
    found = []
    if len(marks) == 2:
        found.append(Caution.TWO_MARKS)
    if len(marks) == 3:
        found.append(Caution.THREE_MARKS)
    angles = np.sort([azimuth(stand, scene.xy[i]) for i in marks])
    gaps = np.diff(np.append(angles, angles[0] + 2 * math.pi))
    if 2 * math.pi - float(gaps.max()) < scene.limits.spread_rad:
        found.append(Caution.NARROW)
    return found


def _residuals(
    scene: Scene, moves: tuple[float, ...], covariance: Array
) -> Check | None:
    """The sights check themselves when there are three or more marks."""
    if len(moves) < 3:
        return None
    sd = math.sqrt(float(np.trace(covariance[:2, :2])) / 2)
    return Check(
        name="residuals of the sights",
        at="station",
        to="all marks",
        expected=0.0,
        unit="m",
        sd=sd,
        tolerance=scene.target.tolerance_m,
        gradient=(0.0, 0.0),
        smallest_move_m=max(moves),
        with_="total station",
    )
