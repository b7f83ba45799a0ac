"""Ways with a total station on a mark: angle and distance from a backsight."""

from __future__ import annotations

import math

import numpy as np

from geometry.checked import Array, Indices
from geometry.decide import noncentrality
from geometry.precision import TotalStation, best_occupied, clear_lines, polar
from geometry.precision.setting_out import setting_out
from geometry.ways.draft import Draft, singular
from geometry.ways.scene import Scene
from geometry.ways.way import Caution, Check, Kind, Number

MOST = 6


def from_occupied(scene: Scene) -> list[Draft]:
    """Polar from every mark that can be occupied, oriented on every other."""
    instrument = scene.tools.total_station
    if instrument is None or len(scene.marks) < 2:
        return []
    gap = scene.xy[:, None] - scene.xy[None]
    apart = np.hypot(gap[..., 0], gap[..., 1])
    within = (apart > 1.0) & (apart <= 2 * instrument.distance_m)
    stand = scene.occupiable & (scene.away > 0.5)
    stand &= scene.away <= 2 * instrument.distance_m
    if not (within & stand[:, None]).any():
        return [singular(Kind.POLAR, "No mark near it can be occupied.")]
    pairs = best_occupied(
        scene.xy,
        scene.place[None],
        scene.target.tolerance_m,
        instrument,
        scene.joint,
        between=within,
        occupiable=stand,
    )
    chosen = _choose(scene, pairs.stations, pairs.backsights)
    s, b = chosen.T
    free = clear_lines(scene.xy[s], scene.xy[b], scene.obstacles)
    # A blocked backsight is no use: keep those that are free, or the best if none is.
    keep = np.flatnonzero(free | ~scene.usable[s] | ~scene.usable[b])
    rows = keep[:MOST] if len(keep) else np.arange(min(2, len(chosen)))
    return [
        _draft(scene, instrument, int(s[i]), int(b[i]), bool(free[i])) for i in rows
    ]


def _choose(scene: Scene, stations: Indices, backsights: Indices) -> Indices:
    """A few pairs: control first, then any usable, then one that may not be used."""
    rows = np.column_stack([stations, backsights])
    good = scene.usable[stations] & scene.usable[backsights]
    open_ = scene.clear[stations]
    longer = np.hypot(*(scene.xy[stations] - scene.xy[backsights]).T)
    sound = scene.trusted[stations] & scene.trusted[backsights]
    sound &= longer >= scene.away[stations]
    control = scene.control[stations] & scene.control[backsights]
    picked: list[int] = []
    for mask, count in (
        (good & control & open_ & sound, 8),
        (good & control & open_, 4),
        (good & open_ & sound, 4),
        (good & open_, 3),
        (good, 2),
        (~good, 1),
    ):
        fresh = [i for i in np.flatnonzero(mask)[: 2 * count + 8] if i not in picked]
        picked += _spread(rows, fresh, count)
    return rows[picked]


def _spread(rows: Indices, found: list[int], count: int) -> list[int]:
    """At most two backsights per station, so that other stations are seen too."""
    used: dict[int, int] = {}
    picked: list[int] = []
    for i in found:
        station = int(rows[i, 0])
        if used.get(station, 0) < 2 and len(picked) < count:
            used[station] = used.get(station, 0) + 1
            picked.append(i)
    return picked


def _draft(
    scene: Scene, instrument: TotalStation, s: int, b: int, back_clear: bool
) -> Draft:
    predicted = polar(scene.xy[s], scene.xy[b], scene.place, instrument)
    numbers = setting_out(scene.xy[s], scene.xy[b], scene.place)
    station, back = scene.marks[s].id, scene.marks[b].id
    cautions = []
    if predicted.backsight_m < predicted.distance_m:
        cautions.append(Caution.SHORT_BACKSIGHT)
    if not (back_clear and scene.clear[s]):
        cautions.append(Caution.BLOCKED)
    if max(predicted.backsight_m, predicted.distance_m) > instrument.distance_m:
        cautions.append(Caution.FAR)
    if predicted.distance_m < 1.5:
        cautions.append(Caution.NEAR)
    return Draft(
        Kind.POLAR,
        (s, b),
        (predicted.to_station, predicted.to_backsight),
        predicted.noise_m2,
        (
            Number("backsight", numbers.backsight_m, "m", station, back),
            Number(
                "backsight azimuth", numbers.backsight_azimuth_rad, "rad", station, back
            ),
            Number(
                "angle right", numbers.angle_right_rad, "rad", station, scene.target.id
            ),
            Number("distance", numbers.distance_m, "m", station, scene.target.id),
            Number("azimuth", numbers.azimuth_rad, "rad", station, scene.target.id),
        ),
        tuple(cautions),
        15.0,
        own_check=_second_backsight(scene, instrument, s, b),
    )


def _second_backsight(
    scene: Scene, instrument: TotalStation, s: int, b: int
) -> Check | None:
    """Angle from the backsight to another mark: it proves the setup, not the point."""
    options = [
        i
        for i in range(len(scene.marks))
        if i not in (s, b) and scene.usable[i] and scene.away[i] > 0
    ]
    options = [
        i
        for i in options
        if 1.5 < math.dist(scene.xy[s], scene.xy[i]) <= instrument.distance_m
    ]
    if not options:
        return None
    best = max(
        options, key=lambda i: (scene.trusted[i], scene.control[i], _reach(scene, s, i))
    )
    g = {i: _turning(scene.xy[i] - scene.xy[s]) for i in (b, best)}
    reach = np.concatenate([g[b] - g[best], -g[b], g[best]])
    rows = np.ravel([(2 * i, 2 * i + 1) for i in (s, b, best)])
    variance = float(reach @ scene.joint[np.ix_(rows, rows)] @ reach)
    variance += instrument.angle_sd_rad**2
    variance += float(
        sum((instrument.backsight_centring_m**2) * (g[i] @ g[i]) for i in (b, best))
    )
    variance += instrument.station_centring_m**2 * float(
        (g[b] - g[best]) @ (g[b] - g[best])
    )
    sd = math.sqrt(variance)
    d = float(scene.away[s])
    return Check(
        name="second backsight",
        at=scene.marks[s].id,
        to=scene.marks[best].id,
        expected=setting_out(scene.xy[s], scene.xy[b], scene.xy[best]).angle_right_rad,
        unit="rad",
        sd=sd,
        tolerance=scene.target.tolerance_m / d,
        gradient=(0.0, 0.0),
        smallest_move_m=math.sqrt(noncentrality(1)) * sd * d,
        with_="total station",
        trusted=bool(scene.trusted[best]),
    )


def _turning(vector: Array) -> Array:
    """Change of an azimuth per metre of its far end."""
    return np.array([vector[1], -vector[0]]) / float(vector @ vector)


def _reach(scene: Scene, s: int, i: int) -> float:
    return math.dist(scene.xy[s], scene.xy[i])
