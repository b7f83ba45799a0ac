"""What a loss would mean: which marks nobody could put back any more.

A mark survives a loss when one of its ways is untouched and, beside it, a neighbour is
left that could check it. For every mark and every one or two of its neighbours this is
counted at once: ways that avoid a and b are all ways, less those through a, less those
through b, plus those through both.
"""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass

import numpy as np

from geometry.checked import Array, Flags, Indices
from geometry.survive.routes import Routes

CHUNK = 2048


@dataclass(frozen=True, slots=True, eq=False)
class Survivability:
    """`targets` (t,) marks looked at. `ways` (t,) how many pairs can put each back.

    `margin` (t,): how many more marks must go, beside itself, before nobody can put it
    back: 0 when it cannot be put back even now, 1, 2, or 3 for three or more.
    `with_one[i]`, `with_two[i]`: the marks, and the pairs of marks, whose loss together
    with its own leaves no checked way.
    """

    targets: Indices
    ways: Indices
    margin: Indices
    with_one: tuple[tuple[int, ...], ...]
    with_two: tuple[tuple[tuple[int, int], ...], ...]


@dataclass(frozen=True, slots=True)
class GroupLoss:
    """What losing a whole group means: `stranded`, members that could not be put back;
    `exposed`, other marks that would have no way left if they were lost later."""

    name: str
    stranded: tuple[int, ...]
    exposed: tuple[int, ...]


def survivability(routes: Routes) -> Survivability:
    """Single and double losses for every target of `routes`.

    >>> from geometry.survive.routes import routes as find
    >>> from geometry.survive.stand import stand
    >>> marks = stand([(0, 0), (10, 0), (10, 10), (0, 10)], 1e-6 * np.eye(2), 0.05)
    >>> survivability(find(marks)).margin.tolist()
    [1, 1, 1, 1]
    """
    count, columns = routes.near.shape
    alive = np.zeros(count, dtype=bool)
    one = np.zeros((count, columns), dtype=bool)
    a, b = routes.first, routes.second
    two = np.zeros((count, len(a)), dtype=bool)
    for start in range(0, count, CHUNK):
        part = slice(start, start + CHUNK)
        alive[part], one[part], two[part] = _kills(routes, part)
    margin = np.where(two.any(axis=1), 2, 3)
    margin = np.where(one.any(axis=1), 1, margin)
    margin = np.where(alive, margin, 0)
    return Survivability(
        routes.targets,
        routes.works.sum(axis=1),
        margin,
        _singles(routes.near, one),
        _doubles(routes.near, two, a, b),
    )


def group_losses(
    routes: Routes, groups: Mapping[str, Collection[int]]
) -> tuple[GroupLoss, ...]:
    """What the loss of each of `groups` (name: indices of marks) would mean.

    A group is what dies together: everything along the haul road, or inside one dig.
    """
    found = []
    for name, members in groups.items():
        lost = np.isin(routes.near, np.fromiter(members, dtype=np.intp))
        alive = _alive(routes, lost)
        inside = np.isin(routes.targets, np.fromiter(members, dtype=np.intp))
        found.append(
            GroupLoss(
                name,
                tuple(routes.targets[inside & ~alive].tolist()),
                tuple(routes.targets[~inside & ~alive].tolist()),
            )
        )
    return tuple(found)


def _kills(routes: Routes, part: slice) -> tuple[Flags, Flags, Flags]:
    """Whether each target has a way now; which columns, and pairs of columns, kill."""
    near, checks = routes.near[part] >= 0, routes.checks[part]
    a, b = routes.first, routes.second
    able = checks.sum(axis=1)
    alive = np.zeros(len(near), dtype=bool)
    saved_one = np.zeros(near.shape, dtype=bool)
    saved_two = np.zeros((len(near), len(a)), dtype=bool)
    left_one = able[:, None] - checks
    left_two = able[:, None] - checks[:, a].astype(int) - checks[:, b]
    used = checks[:, routes.first].astype(int) + checks[:, routes.second]
    for taken in (0, 1, 2):
        # Ways that use up `taken` of the marks able to check need one more than that.
        works = (routes.works[part] & (used == taken)).astype(np.float32)
        total = works.sum(axis=1)
        degree = _degrees(works, routes, near.shape[1])
        alive |= (total > 0) & (able > taken)
        saved_one |= (total[:, None] - degree > 0) & (left_one > taken)
        # A way is a pair, so the ways through both are that pair itself.
        avoid = total[:, None] - degree[:, a] - degree[:, b] + works
        saved_two |= (avoid > 0) & (left_two > taken)
    one = ~saved_one & near & alive[:, None]
    two = ~saved_two & near[:, a] & near[:, b] & ~one[:, a] & ~one[:, b]
    return alive, one, two & alive[:, None]


def _degrees(works: Array, routes: Routes, columns: int) -> Array:
    incidence = np.zeros((works.shape[1], columns), dtype=np.float32)
    incidence[np.arange(len(routes.first)), routes.first] = 1
    incidence[np.arange(len(routes.second)), routes.second] = 1
    return np.asarray(works @ incidence)


def _alive(routes: Routes, lost: Flags) -> Flags:
    """Whether each target keeps a checked way when the `lost` (t, c) columns go."""
    left = (routes.checks & ~lost).sum(axis=1)
    kept = routes.works & ~lost[:, routes.first] & ~lost[:, routes.second]
    used = routes.checks[:, routes.first].astype(int) + routes.checks[:, routes.second]
    fine: Flags = (kept & (used < left[:, None])).any(axis=1)
    return fine


def _singles(near: Indices, one: Flags) -> tuple[tuple[int, ...], ...]:
    found: list[tuple[int, ...]] = [()] * len(near)
    for row in np.flatnonzero(one.any(axis=1)):
        found[row] = tuple(near[row, one[row]].tolist())
    return tuple(found)


def _doubles(
    near: Indices, two: Flags, a: Indices, b: Indices
) -> tuple[tuple[tuple[int, int], ...], ...]:
    found: list[tuple[tuple[int, int], ...]] = [()] * len(near)
    for row in np.flatnonzero(two.any(axis=1)):
        picked = two[row]
        found[row] = tuple(
            zip(
                near[row, a[picked]].tolist(),
                near[row, b[picked]].tolist(),
                strict=True,
            )
        )
    return tuple(found)
