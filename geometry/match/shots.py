"""As-staked shots against planned marks, by number and by position together.

A shot is matched when its number and its place say the same. Where they disagree
the status says how, and nothing is joined in silence: number far away, two numbers
swapped, another mark's place, no number, a look-alike, two marks too close to tell.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange, WrongShape
from geometry.match.nearest import Nearest, nearest_marks
from geometry.match.numbers import (
    Collision,
    NumberIndex,
    alike_index,
    look_alike,
    normal_number,
    number_index,
)
from geometry.match.status import Status

NEAR_M = 0.5
"""A shot this near a planned mark is at it; half a usual spacing is too far."""

CLEARLY = 3.0
"""The next mark must be this many times farther, or the place does not tell."""

TOO_CLOSE_M = 0.03
"""Two marks closer than this are never told apart by place."""

Rows = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class Matches:
    """One row per shot; `planned` and `rival` are rows of the plan, -1 for none.

    `status` holds Status values. `planned` is the mark the shot most likely belongs
    to: by number where the number is known, else by place. `rival` is the mark that
    says otherwise (at the place, or with the look-alike number). `distance_m` is to
    `planned`, or to the nearest mark when there is none; infinite with no marks.
    `unshot` are planned rows without a matched shot, `collisions` numbers of the
    plan that normalising would merge.
    """

    planned: Rows
    rival: Rows
    status: NDArray[np.int8]
    distance_m: Array
    unshot: Rows
    collisions: tuple[Collision, ...]

    def counts(self) -> dict[Status, int]:
        """How many shots have each status that occurs."""
        values, numbers = np.unique(self.status, return_counts=True)
        pairs = zip(values.tolist(), numbers.tolist(), strict=True)
        return {Status(value): number for value, number in pairs}


def match_shots(
    planned_numbers: Sequence[str],
    planned: ArrayLike,
    shot_numbers: Sequence[str],
    shots: ArrayLike,
    *,
    near_m: float = NEAR_M,
    clearly: float = CLEARLY,
) -> Matches:
    """Match shots (m, 2) to planned marks (n, 2); E, N in metres, numbers as written.

    An empty number is allowed and is matched by place alone.

    >>> m = match_shots(["A1", "A2"], [(0, 0), (9, 0)], ["a-1", "A2"], [(0, 0), (5, 5)])
    >>> [Status(s).name for s in m.status]
    ['MATCHED', 'FAR']

    Raises WrongShape when numbers and points differ in count, NotFinite, OutOfRange
    for a distance that is not positive or a ratio below one.
    """
    plan, seen = checked.points("planned", planned), checked.points("shots", shots)
    _same_count("planned", planned_numbers, plan)
    _same_count("shots", shot_numbers, seen)
    near = checked.positive("near_m", near_m)
    if checked.number("clearly", clearly) < 1.0:
        raise OutOfRange("clearly must be one or more.")
    index = number_index(planned_numbers)
    place = nearest_marks(plan, seen, near_m=near, clearly=clearly)
    known = _by_number(index, shot_numbers)
    _settle_by_place(known, place, planned_numbers, shot_numbers)
    alike = _alike(planned_numbers, shot_numbers, known)
    away = np.full(len(seen), np.inf)
    named = known >= 0
    away[named] = np.hypot(*(seen[named] - plan[known[named]]).T)
    status, row, rival = _judged(known, alike, away, place, near)
    _swapped(status, row, rival)
    _repeated(status, row, away)
    got = np.isin(status, (Status.MATCHED, Status.REPEATED))
    return Matches(
        planned=row,
        rival=rival,
        status=status,
        distance_m=np.where(named, away, place.distance_m),
        unshot=np.setdiff1d(np.arange(len(plan)), row[got]),
        collisions=index.collisions,
    )


def _same_count(name: str, numbers: Sequence[str], rows: Array) -> None:
    if len(numbers) != len(rows):
        raise WrongShape(
            f"{name} must have one number for each point.",
            where=f"{len(numbers)} numbers, {len(rows)} points.",
        )


_MANY = -2


def _by_number(index: NumberIndex, numbers: Sequence[str]) -> Rows:
    """Planned row of each shot's number: -1 unknown, -2 several marks have it."""
    rows = np.full(len(numbers), -1, dtype=np.int64)
    for i, text in enumerate(numbers):
        row = index.exact.get(text)
        if row is None:
            row = index.normal.get(normal_number(text))
        if row is not None:
            rows[i] = row if row >= 0 else _MANY
    return rows


def _settle_by_place(
    known: Rows, place: Nearest, planned: Sequence[str], numbers: Sequence[str]
) -> None:
    """A number several marks have is settled by standing at one of them."""
    for i in np.flatnonzero((known == _MANY) & (place.row >= 0) & place.clear).tolist():
        row = int(place.row[i])
        if normal_number(planned[row]) == normal_number(numbers[i]):
            known[i] = row


def _alike(planned: Sequence[str], numbers: Sequence[str], known: Rows) -> Rows:
    rows = np.full(len(numbers), -1, dtype=np.int64)
    unknown = np.flatnonzero(known == -1).tolist()
    index = alike_index(planned) if unknown else {}
    for i in unknown:
        rows[i] = index.get(look_alike(numbers[i]), -1)
    return rows


def _judged(
    known: Rows, alike: Rows, away: Array, place: Nearest, near: float
) -> tuple[NDArray[np.int8], Rows, Rows]:
    """Status, planned row and rival row of each shot."""
    named, nameless = known >= 0, known == -1
    here = place.row >= 0
    elsewhere = named & here & (place.row != known)
    nearer = place.clear & (away > place.distance_m + TOO_CLOSE_M)
    reads = (alike >= 0) & ((alike == place.row) | (alike == place.second))
    cases = [
        (known == _MANY, Status.AMBIGUOUS),
        (elsewhere & ((away > near) | nearer), Status.OTHER_PLACE),
        (named & (away <= near), Status.MATCHED),
        (named, Status.FAR),
        (nameless & here & reads, Status.LOOK_ALIKE),
        (nameless & here & place.clear, Status.BY_PLACE),
        (nameless & here, Status.AMBIGUOUS),
        (nameless & (alike >= 0), Status.LOOK_ALIKE_FAR),
    ]
    status = np.select(
        [case for case, _ in cases], [int(s) for _, s in cases], int(Status.UNPLANNED)
    ).astype(np.int8)
    told = np.isin(status, (Status.LOOK_ALIKE,))
    row = np.where(named, known, np.where(told, alike, place.row))
    rival = np.where(here & (place.row != row), place.row, place.second)
    rival = np.where(named & ~elsewhere, -1, rival)
    rival = np.where(status == Status.LOOK_ALIKE_FAR, alike, rival)
    return status, row, rival


def _swapped(status: NDArray[np.int8], planned: Rows, rival: Rows) -> None:
    """Two shots that stand at each other's marks had their numbers exchanged."""
    rows = np.flatnonzero(status == Status.OTHER_PLACE)
    pairs = set(zip(planned[rows].tolist(), rival[rows].tolist(), strict=True))
    for row in rows:
        if (int(rival[row]), int(planned[row])) in pairs:
            status[row] = Status.SWAPPED


def _repeated(status: NDArray[np.int8], planned: Rows, away: Array) -> None:
    """Of several matched shots of one mark the nearest is it, the rest repeat it."""
    rows = np.flatnonzero(status == Status.MATCHED)
    order = rows[np.lexsort((away[rows], planned[rows]))]
    again = np.flatnonzero(planned[order][1:] == planned[order][:-1]) + 1
    status[order[again]] = Status.REPEATED
