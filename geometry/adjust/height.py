"""The level network as a model: one unknown height for each point not held."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.adjust.observations import (
    HeightDifference,
    Heights,
    check_measurement,
    heights,
)
from geometry.adjust.rows import Group, Ints, Rows, weight_of
from geometry.checked import LARGEST_M, Array
from geometry.errors import EmptyInput, OutOfRange

NEGLIGIBLE_M = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class KnownHeights:
    """One group of known heights: point numbers, values at the local origin, weight."""

    at: Ints
    values: Array
    weight: Array


@dataclass(frozen=True, slots=True, eq=False)
class HeightModel:
    """A level network; `columns` (n,) is -1 where a height is held at `start`."""

    names: tuple[str, ...]
    origin: float
    start: Array
    first: Ints
    second: Ints
    value: Array
    sigma: Array
    known: tuple[KnownHeights, ...]
    columns: Ints

    @property
    def count(self) -> int:
        return int((self.columns >= 0).sum())

    @property
    def nodes(self) -> Ints:
        return np.arange(self.count)

    @property
    def negligible(self) -> Array:
        return np.full(self.count, NEGLIGIBLE_M)

    def positions(self, unknowns: Array) -> Array:
        """Heights of all points at the local origin, (n,)."""
        found = self.start.copy()
        used = self.columns >= 0
        found[used] = unknowns[self.columns[used]]
        return found

    def unknowns(self, positions: Array) -> Array:
        """The unknowns from heights of all points."""
        return positions[self.columns >= 0]

    def rows(self, unknowns: Array) -> Rows:
        """Whitened rows at these unknowns; see `geometry.adjust.rows`."""
        z = self.positions(unknowns)
        columns = np.stack([self.columns[self.first], self.columns[self.second]], 1)
        coefficients = np.array([-1.0, 1.0]) / self.sigma[:, None]
        rise = z[self.second] - z[self.first]
        groups = tuple(
            Group(self.columns[k.at], k.weight, k.values - z[k.at]) for k in self.known
        )
        return Rows(columns, coefficients, (self.value - rise) / self.sigma, groups)


def height_model(
    observations: Sequence[HeightDifference],
    known: Sequence[Heights],
    fixed: Mapping[str, float],
    held: Sequence[str] = (),
) -> HeightModel:
    """The model; points are those named, `held` ones keep their start height.

    Raises EmptyInput, NotFinite, OutOfRange, CoincidentPoints.
    """
    names = _names(observations, known, fixed)
    if not names:
        raise EmptyInput("There is no levelling to adjust.", do="Give a run.")
    number = {name: i for i, name in enumerate(names)}
    for one in observations:
        check_measurement(one, (one.start, one.end), one.value_m, one.sigma_m)
    first, second = (
        np.array([number[n] for n in ends], dtype=np.intp)
        for ends in ([o.start for o in observations], [o.end for o in observations])
    )
    for name in fixed:
        if abs(checked.number(f"the height of {name}", fixed[name])) > LARGEST_M:
            raise OutOfRange(
                f"The height of {name} is larger than any on Earth.",
                do="Check its unit.",
            )
    value = np.array([o.value_m for o in observations])
    sigma = np.array([o.sigma_m for o in observations])
    given = [*fixed.values(), *(float(z) for k in known for z in k.values_m)]
    origin = round(float(np.mean(given)), 3) if given else 0.0
    start = np.zeros(len(names))
    for name, z in fixed.items():
        start[number[name]] = z - origin
    free = np.ones(len(names), dtype=np.bool_)
    free[[number[name] for name in (*fixed, *held)]] = False
    columns = np.full(len(names), -1, dtype=np.intp)
    columns[free] = np.arange(int(free.sum()))
    groups = tuple(_known(number, origin, k) for k in known)
    return HeightModel(
        names, origin, start, first, second, value, sigma, groups, columns
    )


def _names(
    observations: Sequence[HeightDifference],
    known: Sequence[Heights],
    fixed: Mapping[str, float],
) -> tuple[str, ...]:
    names = dict.fromkeys(fixed)
    names.update(dict.fromkeys(n for group in known for n in group.names))
    for one in observations:
        if not isinstance(one, HeightDifference):
            raise OutOfRange(f"{one} does not belong in a level network.")
        names[one.start] = names[one.end] = None
    return tuple(names)


def _known(number: Mapping[str, int], origin: float, group: Heights) -> KnownHeights:
    words = "the known heights " + ", ".join(group.names[:4])
    at = np.array([number[n] for n in group.names], dtype=np.intp)
    sound = heights(group.names, group.values_m, group.covariance_m2)
    weight = weight_of(sound.covariance_m2, words)
    return KnownHeights(at, sound.values_m - origin, weight)
