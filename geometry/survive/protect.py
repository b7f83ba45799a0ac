"""The fewest marks to protect so that every mark keeps a way back, whatever else goes.

An integer programme, solved exactly for small sites by scipy's HiGHS: choose marks, so
that every target is protected itself or has a way all of whose marks, and one more that
checks it, are. Beyond that size a greedy choice, said to be one.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp
from scipy.sparse import coo_array, csr_array

from geometry.checked import Array, Flags, Indices
from geometry.survive.routes import Routes

MOST_WAYS = 1_500
"""Ways up to which the exact programme is the default: about a second."""

NODES = 200
"""Branches the solver may open: a bound that does not depend on the clock."""


@dataclass(frozen=True, slots=True)
class Protection:
    """`marks` to protect. `optimal`: no smaller set exists. `hopeless`: targets that
    have no checked way even now; they are not among those provided for."""

    marks: tuple[int, ...]
    optimal: bool
    hopeless: tuple[int, ...]


def protect(routes: Routes, *, exact: bool | None = None) -> Protection:
    """Fewest marks that keep a checked way for every target of `routes`.

    `exact` None: the exact programme up to 1,500 ways, greedy beyond (a few per cent
    to a seventh more marks); True can take a minute on a large site.

    >>> from geometry.survive.routes import routes as find
    >>> from geometry.survive.stand import stand
    >>> marks = stand([(0, 0), (10, 0), (10, 10), (0, 10)], 1e-6 * np.eye(2), 0.05)
    >>> len(protect(find(marks)).marks)
    3
    """
    used = routes.checks[:, routes.first].astype(int) + routes.checks[:, routes.second]
    works = routes.works & (used < routes.checks.sum(axis=1)[:, None])
    able = works.any(axis=1)
    hopeless = tuple(routes.targets[~able].tolist())
    if not able.any():
        return Protection((), True, hopeless)
    row, pair = np.nonzero(works)
    case = _Case(
        routes.targets,
        routes.near,
        routes.checks,
        np.flatnonzero(able),
        row,
        routes.near[row, routes.first[pair]],
        routes.near[row, routes.second[pair]],
        used[row, pair],
    )
    if exact is None:
        exact = len(row) <= MOST_WAYS
    marks, optimal = _solved(case) if exact else (None, False)
    if marks is None:
        marks = _greedy(case)
    return Protection(tuple(sorted(marks)), optimal, hopeless)


@dataclass(frozen=True, slots=True, eq=False)
class _Case:
    """Ways as rows: target row, its two marks, how many of them could also check."""

    targets: Indices
    near: Indices
    checks: Flags
    able: Indices
    row: Indices
    one: Indices
    two: Indices
    used: Indices


def _solved(case: _Case) -> tuple[set[int] | None, bool]:
    names = np.unique(
        np.concatenate([case.targets[case.able], case.near[case.near >= 0]])
    )
    at = {int(name): i for i, name in enumerate(names)}
    place = np.array([at.get(int(n), 0) for n in range(int(names.max()) + 1)])
    count, ways = len(names), len(case.row)
    constraints = [
        LinearConstraint(matrix, low, np.inf)
        for matrix, low in (
            _covered(case, place, count),
            _whole(case, place, count),
            _checked(case, place, count),
        )
    ]
    # Ways may stay fractional: among those whose marks are all chosen, one is whole.
    answer = milp(
        np.concatenate([np.ones(count), np.zeros(ways)]),
        constraints=constraints,
        integrality=np.concatenate([np.ones(count), np.zeros(ways)]),
        bounds=Bounds(0, 1),
        options={"node_limit": NODES, "presolve": True},
    )
    if answer.x is None:
        return None, False
    return set(names[answer.x[:count] > 0.5].tolist()), answer.status == 0


def _covered(case: _Case, place: Indices, count: int) -> tuple[csr_array, Array]:
    """Each target is protected itself, or one of its ways is."""
    rank = np.full(len(case.targets), -1)
    rank[case.able] = np.arange(len(case.able))
    rows = np.concatenate([rank[case.row], np.arange(len(case.able))])
    columns = np.concatenate(
        [count + np.arange(len(case.row)), place[case.targets[case.able]]]
    )
    shape = (len(case.able), count + len(case.row))
    matrix = coo_array((np.ones(len(rows)), (rows, columns)), shape=shape)
    return matrix.tocsr(), np.ones(len(case.able))


def _whole(case: _Case, place: Indices, count: int) -> tuple[csr_array, Array]:
    """The ways of a target through one mark count only when that mark is protected.

    Of a target's ways one is enough, so they may share the mark's one unit: a tighter
    bound than way by way, and the solver needs far fewer branches.
    """
    ways = np.arange(len(case.row))
    width = int(place.size)
    keys = np.concatenate([case.row * width + case.one, case.row * width + case.two])
    unique, rows = np.unique(keys, return_inverse=True)
    index = np.arange(len(unique))
    matrix = coo_array(
        (
            np.concatenate([-np.ones(2 * len(ways)), np.ones(len(unique))]),
            (
                np.concatenate([rows, index]),
                np.concatenate([count + ways, count + ways, place[unique % width]]),
            ),
        ),
        shape=(len(unique), count + len(ways)),
    )
    return matrix.tocsr(), np.zeros(len(unique))


def _checked(case: _Case, place: Indices, count: int) -> tuple[csr_array, Array]:
    """Beside the marks of the way, one more that can check must be protected."""
    rank = np.full(len(case.targets), -1)
    rank[case.able] = np.arange(len(case.able))
    row, column = np.nonzero(case.checks[case.able])
    rows = np.concatenate([row, rank[case.row]])
    columns = np.concatenate(
        [place[case.near[case.able][row, column]], count + np.arange(len(case.row))]
    )
    values = np.concatenate([np.ones(len(row)), -(case.used + 1.0)])
    shape = (len(case.able), count + len(case.row))
    matrix = coo_array((values, (rows, columns)), shape=shape).tocsr()
    return matrix, np.zeros(len(case.able))


def _greedy(case: _Case) -> set[int]:
    """Again and again the mark or pair that provides for most targets per mark."""
    size = int(max(case.near.max(), case.targets.max())) + 1
    chosen = np.zeros(size, dtype=bool)
    while True:
        served = _served(case, chosen)
        open_ways = np.flatnonzero(~served[case.row])
        waiting = case.able[~served[case.able]]
        if not len(waiting):
            return _pruned(case, chosen)
        one, two = case.one[open_ways], case.two[open_ways]
        lacks = (~chosen[one]).astype(int) + ~chosen[two]
        pick = _most(case, chosen, open_ways, lacks, waiting, size)
        chosen[pick] = True


def _pruned(case: _Case, chosen: Flags) -> set[int]:
    """Without the marks that later choices made needless, busiest marks kept longest."""
    busy = np.bincount(case.one, minlength=len(chosen))
    busy += np.bincount(case.two, minlength=len(chosen))
    held = np.flatnonzero(chosen)
    for mark in held[np.argsort(busy[held], kind="stable")]:
        chosen[mark] = False
        if not _served(case, chosen)[case.able].all():
            chosen[mark] = True
    return set(np.flatnonzero(chosen).tolist())


def _served(case: _Case, chosen: Flags) -> Flags:
    able = (case.checks & (case.near >= 0) & chosen[case.near]).sum(axis=1)
    fine = chosen[case.one] & chosen[case.two] & (case.used < able[case.row])
    served = chosen[case.targets].copy()
    served[case.row[fine]] = True
    return served


def _most(
    case: _Case,
    chosen: Flags,
    open_ways: Indices,
    lacks: Indices,
    waiting: Indices,
    size: int,
) -> list[int]:
    gain = np.zeros(size)
    np.add.at(gain, case.targets[waiting], 1.0)
    one, two = case.one[open_ways], case.two[open_ways]
    row = case.row[open_ways]
    missing = np.where(chosen[one], two, one)
    single = lacks == 1
    _add_once(gain, row[single], missing[single])
    complete = np.unique(row[lacks == 0])
    for target in complete:
        # The way stands; only its check is missing.
        marks = case.near[target, case.checks[target]]
        gain[marks[~chosen[marks]]] += 1.0
    double = lacks == 2
    best = int(np.argmax(np.where(chosen, -1.0, gain)))
    if double.any():
        low = np.minimum(one[double], two[double])
        high = np.maximum(one[double], two[double])
        _, first, counts = np.unique(
            low * size + high, return_index=True, return_counts=True
        )
        top = int(np.argmax(counts))
        if counts[top] / 2 > gain[best]:
            return [int(low[first[top]]), int(high[first[top]])]
    return [best]


def _add_once(gain: Array, row: Indices, mark: Indices) -> None:
    """One for every different target that needs only this mark."""
    pairs = np.unique(np.column_stack([row, mark]), axis=0)
    if len(pairs):
        np.add.at(gain, pairs[:, 1], 1.0)
