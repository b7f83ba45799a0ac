"""Grid and ground: coordinates that know their surface and refuse to be mixed.

A project's ground coordinates are grid coordinates scaled once by the combined factor
about an origin, and moved so that they cannot be taken for grid. Points and distances
carry their frame; putting two frames together is an error and never a result.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import NoReturn

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import MixedFrames, WrongShape
from geometry.frames.factors import checked_factor

_FAR_ENOUGH_M = 10_000.0


@dataclass(frozen=True, slots=True)
class GridFrame:
    """A map projection's plane: a name, and its EPSG code if it has one.

    >>> grid = GridFrame("Invented North zone")
    >>> grid.points([(500000.0, 100000.0)]).en_m.tolist()
    [[500000.0, 100000.0]]
    """

    name: str
    epsg: int | None = None

    def points(self, en_m: ArrayLike) -> GridPoints:
        """Points (n, 2) of this grid, E, N in metres."""
        return GridPoints(self, checked.points(f"grid points of {self.name}", en_m))

    def distance(self, metres: float) -> GridDistance:
        """A distance on this grid, metres."""
        return GridDistance(self, checked.number("grid distance", metres))


@dataclass(frozen=True, slots=True)
class GroundFrame:
    """A project's ground plane: grid about `grid_origin_m`, divided by the factor.

    ground = ground_origin + (grid - grid_origin) / combined_factor, E, N metres.
    Raises OutOfRange for a factor that is not near one, NotFinite, WrongShape.

    >>> grid = GridFrame("Invented North zone")
    >>> site = GroundFrame("Site", grid, 0.9999, (5e5, 1e5), (10000.0, 20000.0))
    >>> there = site.from_grid(grid.points([(500999.9, 100000.0)]))
    >>> there.en_m.round(6).tolist(), site.easily_confused
    ([[11000.0, 20000.0]], False)
    """

    name: str
    grid: GridFrame
    combined_factor: float
    grid_origin_m: tuple[float, float]
    ground_origin_m: tuple[float, float]

    def __post_init__(self) -> None:
        checked_factor("combined factor", self.combined_factor)
        checked.point("grid origin", self.grid_origin_m)
        checked.point("ground origin", self.ground_origin_m)

    @property
    def easily_confused(self) -> bool:
        """Whether ground coordinates look like grid ones: moved less than 10 km."""
        moved = np.subtract(self.ground_origin_m, self.grid_origin_m)
        return float(np.abs(moved).max()) < _FAR_ENOUGH_M

    def points(self, en_m: ArrayLike) -> GroundPoints:
        """Points (n, 2) of this ground plane, E, N in metres."""
        return GroundPoints(self, checked.points(f"ground points of {self.name}", en_m))

    def distance(self, metres: float) -> GroundDistance:
        """A distance on the ground, metres, as taped or measured and reduced."""
        return GroundDistance(self, checked.number("ground distance", metres))

    def from_grid(self, points: GridPoints) -> GroundPoints:
        """Grid points on the ground. Raises MixedFrames for another grid's points."""
        _must_be(points, GridPoints, self.grid)
        moved = (points.en_m - self.grid_origin_m) / self.combined_factor
        return GroundPoints(self, np.add(self.ground_origin_m, moved))

    def to_grid(self, points: GroundPoints) -> GridPoints:
        """Ground points on the grid. Raises MixedFrames for another frame's points."""
        _must_be(points, GroundPoints, self)
        moved = (points.en_m - self.ground_origin_m) * self.combined_factor
        return GridPoints(self.grid, np.add(self.grid_origin_m, moved))

    def distance_from_grid(self, distance: GridDistance) -> GroundDistance:
        """A grid distance on the ground: divided by the combined factor, once."""
        _must_be(distance, GridDistance, self.grid)
        return GroundDistance(self, distance.metres / self.combined_factor)

    def distance_to_grid(self, distance: GroundDistance) -> GridDistance:
        """A ground distance on the grid: times the combined factor, once."""
        _must_be(distance, GroundDistance, self)
        return GridDistance(self.grid, distance.metres * self.combined_factor)


@dataclass(frozen=True, slots=True, eq=False)
class GridPoints:
    """Points (n, 2), E, N in metres, of one grid; made by `GridFrame.points`."""

    frame: GridFrame
    en_m: Array = field(repr=False)

    def distances_to(self, other: GridPoints) -> Array:
        """Grid distances (n,) in metres, point by point. Raises MixedFrames."""
        return _lengths(self, other)

    def __array__(self, *_args: object, **_kinds: object) -> NoReturn:
        raise _bare(self.frame.name)


@dataclass(frozen=True, slots=True, eq=False)
class GroundPoints:
    """Points (n, 2), E, N in metres, of one ground plane, made by its frame."""

    frame: GroundFrame
    en_m: Array = field(repr=False)

    def distances_to(self, other: GroundPoints) -> Array:
        """Ground distances (n,) in metres, point by point. Raises MixedFrames."""
        return _lengths(self, other)

    def __array__(self, *_args: object, **_kinds: object) -> NoReturn:
        raise _bare(self.frame.name)


@dataclass(frozen=True, slots=True)
class GridDistance:
    """A distance on a grid; made by `GridFrame.distance`."""

    frame: GridFrame
    metres: float

    def plus(self, other: GridDistance) -> GridDistance:
        """The sum of two distances of one grid. Raises MixedFrames."""
        _must_be(other, GridDistance, self.frame)
        return GridDistance(self.frame, self.metres + other.metres)


@dataclass(frozen=True, slots=True)
class GroundDistance:
    """A distance on the ground; made by `GroundFrame.distance`."""

    frame: GroundFrame
    metres: float

    def plus(self, other: GroundDistance) -> GroundDistance:
        """The sum of two distances of one ground plane. Raises MixedFrames."""
        _must_be(other, GroundDistance, self.frame)
        return GroundDistance(self.frame, self.metres + other.metres)


_Value = GridPoints | GroundPoints | GridDistance | GroundDistance


def _must_be(value: _Value, kind: type[_Value], frame: GridFrame | GroundFrame) -> None:
    if isinstance(value, kind) and value.frame == frame:
        return
    name = getattr(getattr(value, "frame", None), "name", "no frame")
    surface = "the grid" if isinstance(frame, GridFrame) else "the ground"
    raise MixedFrames(
        f"This belongs to {surface} of {frame.name} and nothing else.",
        where=f"It was given {type(value).__name__} of {name}.",
        do="Bring it over with the ground frame's from_grid or to_grid first.",
    )


def _lengths(a: GridPoints | GroundPoints, b: GridPoints | GroundPoints) -> Array:
    _must_be(b, type(a), a.frame)
    if a.en_m.shape != b.en_m.shape:
        raise WrongShape(
            "Distances need as many points on either side.",
            where=f"{len(a.en_m)} and {len(b.en_m)} were given.",
        )
    apart = a.en_m - b.en_m
    return np.hypot(apart[:, 0], apart[:, 1])


def _bare(name: str) -> MixedFrames:
    return MixedFrames(
        f"Points of {name} are not bare numbers.",
        do="Take en_m where the surface no longer matters.",
    )
