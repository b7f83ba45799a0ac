"""The plane network as a model: points, orientations, and every kind of measurement.

Unknowns are easting and northing of each point that is not held, then one orientation
for each round of directions, all relative to a local origin so that no digit is lost
to large coordinates.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.adjust.observations import (
    Angle,
    Azimuth,
    Coordinates,
    Direction,
    Distance,
    PlaneObservation,
    check_measurement,
    coordinates,
)
from geometry.adjust.rows import Flags, Group, Ints, Rows, weight_of
from geometry.checked import Array
from geometry.errors import CoincidentPoints, EmptyInput, OutOfRange, WrongShape

NEGLIGIBLE_M = 1e-8
NEGLIGIBLE_RAD = 1e-11
SMALLEST_SIGHT_M = 1e-6


@dataclass(frozen=True, slots=True, eq=False)
class Table:
    """Measurements as columns: ends as point numbers, `third` only for angles.

    `kind` is 0 distance, 1 direction, 2 angle, 3 azimuth; `turn` the number of the
    orientation of a direction, otherwise -1.
    """

    kind: Ints
    first: Ints
    second: Ints
    third: Ints
    turn: Ints
    value: Array
    sigma: Array


KINDS = ("distance", "direction", "angle", "azimuth")


@dataclass(frozen=True, slots=True, eq=False)
class Known:
    """A group of known positions: point numbers, values at the local origin, weight."""

    at: Ints
    values: Array
    weight: Array


@dataclass(frozen=True, slots=True, eq=False)
class PlaneModel:
    """Everything about a network except the values of its unknowns.

    `held` (n, 2) says which coordinates are not unknowns; those keep their `start`.
    """

    names: tuple[str, ...]
    origin: Array
    start: Array
    held: Flags
    table: Table
    known: tuple[Known, ...]
    rounds: tuple[tuple[str, str], ...]
    columns: Ints
    turn_columns: Ints

    @property
    def count(self) -> int:
        return int((self.columns >= 0).sum()) + len(self.turn_columns)

    @property
    def nodes(self) -> Ints:
        node = np.zeros(self.count, dtype=np.intp)
        used = self.columns >= 0
        node[self.columns[used]] = np.nonzero(used)[0]
        node[self.turn_columns] = len(self.names) + np.arange(len(self.turn_columns))
        packed: Ints = np.unique(node, return_inverse=True)[1]
        return packed

    @property
    def negligible(self) -> Array:
        limit = np.full(self.count, NEGLIGIBLE_M)
        limit[self.turn_columns] = NEGLIGIBLE_RAD
        return limit

    def positions(self, unknowns: Array) -> Array:
        """Positions of all points at the local origin, (n, 2)."""
        found = self.start.copy()
        used = self.columns >= 0
        found[used] = unknowns[self.columns[used]]
        return found

    def unknowns(self, positions: Array) -> Array:
        """Unknowns from positions, the orientations from the directions there."""
        x = np.zeros(self.count)
        used = self.columns >= 0
        x[self.columns[used]] = positions[used]
        x[self.turn_columns] = _orientations(
            self.table, positions, len(self.turn_columns)
        )
        return x

    def rows(self, unknowns: Array) -> Rows:
        """Whitened rows at these unknowns; see `geometry.adjust.rows`."""
        positions = self.positions(unknowns)
        turns = unknowns[self.turn_columns]
        groups = tuple(
            Group(
                columns=self.columns[known.at].ravel(),
                weight=known.weight,
                misclosure=(known.values - positions[known.at]).ravel(),
            )
            for known in self.known
        )
        return _rows(self, positions, turns, groups)


def plane_model(
    points: Mapping[str, ArrayLike],
    observations: Sequence[PlaneObservation],
    known: Sequence[Coordinates],
    fixed: frozenset[str],
    also_held: Sequence[tuple[str, int]] = (),
) -> PlaneModel:
    """The model of a network; `also_held` names single coordinates, 0 E or 1 N.

    Raises EmptyInput, NotFinite, OutOfRange, WrongShape, CoincidentPoints.
    """
    if not points:
        raise EmptyInput("There is no point to adjust.", do="Give start coordinates.")
    names = tuple(points)
    number = {name: i for i, name in enumerate(names)}
    start = checked.points("points", np.array([_pair(n, points[n]) for n in names]))
    origin = np.round(start.mean(axis=0), 3)
    start = start - origin
    for name in fixed:
        _at(number, name, "fixed points")
    held = np.zeros((len(names), 2), dtype=np.bool_)
    held[[number[name] for name in fixed]] = True
    for name, axis in also_held:
        held[number[name], axis] = True
    table, rounds = _table(number, observations)
    _check_sights(names, start, table)
    columns = np.full(held.shape, -1, dtype=np.intp)
    columns[~held] = np.arange(int((~held).sum()))
    turn_columns = int((~held).sum()) + np.arange(len(rounds), dtype=np.intp)
    groups = tuple(_known(number, origin, group) for group in known)
    return PlaneModel(
        names, origin, start, held, table, groups, rounds, columns, turn_columns
    )


def _pair(name: str, values: ArrayLike) -> Array:
    array = np.asarray(values, dtype=np.float64)
    if array.shape != (2,):
        raise WrongShape(
            "A start position must be one easting and one northing.",
            where=f"It belongs to point {name}.",
        )
    return array


def _at(number: Mapping[str, int], name: str, where: object) -> int:
    if name not in number:
        raise OutOfRange(
            f"Point {name} has no start coordinates.",
            where=f"It stands in the {where}.",
            do="Give its design or approximate coordinates, or correct the name.",
        )
    return number[name]


def _known(number: Mapping[str, int], origin: Array, group: Coordinates) -> Known:
    words = "the known points " + ", ".join(group.names[:4])
    at = np.array([_at(number, n, "known points") for n in group.names], dtype=np.intp)
    sound = coordinates(group.names, group.values_m, group.covariance_m2)
    return Known(at, sound.values_m - origin, weight_of(sound.covariance_m2, words))


def _table(
    number: Mapping[str, int], observations: Sequence[PlaneObservation]
) -> tuple[Table, tuple[tuple[str, str], ...]]:
    whole = np.zeros((len(observations), 5), dtype=np.intp)
    real = np.zeros((len(observations), 2))
    rounds: dict[tuple[str, str], int] = {}
    for i, one in enumerate(observations):
        kind, ends, value, sigma = _taken_apart(one)
        check_measurement(one, ends, value, sigma)
        at = [_at(number, name, one) for name in ends]
        turn = -1
        if isinstance(one, Direction):
            turn = rounds.setdefault((one.station, one.round_name), len(rounds))
        whole[i] = (kind, at[0], at[1], at[2] if kind == 2 else -1, turn)
        real[i] = (value, sigma)
    return Table(*whole.T.copy(), *real.T.copy()), tuple(rounds)


def _taken_apart(one: PlaneObservation) -> tuple[int, tuple[str, ...], float, float]:
    """Kind, points, value and sigma of one measurement."""
    if isinstance(one, Distance):
        if one.value_m <= 0:
            raise OutOfRange(
                "A distance must be greater than zero.", where=f"It is the {one}."
            )
        return 0, (one.start, one.end), one.value_m, one.sigma_m
    if isinstance(one, Direction):
        return 1, (one.station, one.target), one.value_rad, one.sigma_rad
    if isinstance(one, Angle):
        ends = (one.station, one.backsight, one.foresight)
        return 2, ends, one.value_rad, one.sigma_rad
    if isinstance(one, Azimuth):
        return 3, (one.start, one.end), one.value_rad, one.sigma_rad
    raise OutOfRange(f"{one} does not belong in a plane network.")


def _check_sights(names: tuple[str, ...], start: Array, table: Table) -> None:
    for far in (table.second, table.third):
        used = np.flatnonzero(far >= 0)
        d = np.hypot(*(start[far[used]] - start[table.first[used]]).T)
        if bool((d < SMALLEST_SIGHT_M).any()):
            i = int(used[np.argmax(d < SMALLEST_SIGHT_M)])
            raise CoincidentPoints(
                "Two points with a measurement between them stand in one place.",
                where=f"They are {names[table.first[i]]} and {names[far[i]]}.",
                do="Correct the start coordinates of one of them.",
            )


def wrapped(angle: Array) -> Array:
    """Angles brought into [-pi, pi)."""
    result: Array = (angle + np.pi) % (2 * np.pi) - np.pi
    return result


def _orientations(table: Table, positions: Array, count: int) -> Array:
    sights = np.flatnonzero(table.kind == 1)
    delta = positions[table.second[sights]] - positions[table.first[sights]]
    turn = np.arctan2(delta[:, 0], delta[:, 1]) - table.value[sights]
    at = table.turn[sights]
    sine = np.bincount(at, weights=np.sin(turn), minlength=count)
    cosine = np.bincount(at, weights=np.cos(turn), minlength=count)
    result: Array = np.arctan2(sine, cosine)
    return result


def _rows(
    model: PlaneModel, positions: Array, turns: Array, groups: tuple[Group, ...]
) -> Rows:
    table = model.table
    m = len(table.kind)
    columns = np.full((m, 6), -1, dtype=np.intp)
    coefficients = np.zeros((m, 6))
    computed = np.zeros(m)
    azimuth, length, across = _sight(positions, table.first, table.second)
    columns[:, 0:2] = model.columns[table.first]
    columns[:, 2:4] = model.columns[table.second]
    along = across[:, ::-1] * (-1.0, 1.0)
    per_radian = across / length[:, None]
    kind = table.kind
    is_distance = (kind == 0)[:, None]
    toward = np.where(is_distance, along, per_radian)
    coefficients[:, 0:2], coefficients[:, 2:4] = -toward, toward
    computed[:] = np.where(kind == 0, length, azimuth)
    sights = np.flatnonzero(kind == 1)
    columns[sights, 4] = model.turn_columns[table.turn[sights]]
    coefficients[sights, 4] = -1.0
    computed[sights] -= turns[table.turn[sights]]
    _add_angles(model, positions, columns, coefficients, computed)
    off = table.value - computed
    misclosure = np.where(kind == 0, off, wrapped(off)) / table.sigma
    coefficients /= table.sigma[:, None]
    return Rows(columns, coefficients, misclosure, groups)


def _add_angles(
    model: PlaneModel,
    positions: Array,
    columns: Ints,
    coefficients: Array,
    computed: Array,
) -> None:
    """Angle = azimuth to foresight (`third`) less azimuth to backsight (`second`)."""
    table = model.table
    at = np.flatnonzero(table.kind == 2)
    if not len(at):
        return
    azimuth, length, across = _sight(positions, table.first[at], table.third[at])
    fore = across / length[:, None]
    back = coefficients[at, 2:4].copy()
    columns[at, 4:6] = model.columns[table.third[at]]
    coefficients[at, 4:6] = fore
    coefficients[at, 2:4] = -back
    coefficients[at, 0:2] = back - fore
    computed[at] = azimuth - computed[at]


def _sight(positions: Array, start: Ints, end: Ints) -> tuple[Array, Array, Array]:
    """Azimuth, length and the unit vector to the right of each sight."""
    delta = positions[np.maximum(end, 0)] - positions[start]
    length = np.maximum(np.hypot(delta[:, 0], delta[:, 1]), SMALLEST_SIGHT_M)
    unit = delta / length[:, None]
    right = np.stack([unit[:, 1], -unit[:, 0]], axis=1)
    return np.arctan2(delta[:, 0], delta[:, 1]), length, right
