"""Which sides and diagonals to measure between the stakes, in the order they help.

Joint, not one by one: each step takes the distance that most raises the weakest
direction in which some stake could be wrong without any check noticing. Local
redundancy and smallest detectable error follow Baarda (1968), from memory.
"""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, EmptyInput

NONCENTRALITY_2D = 19.6624
"""Two unknowns, significance .001, power .80 (Baarda 1968, from memory)."""

_UNSEEN = 1e-6
"""Share of an error below which it does not show at all."""


@dataclass(frozen=True, slots=True)
class RankedCheck:
    """A distance to measure between two stakes, given by their rows.

    `length_m` is what the tape should read, `predicted_sd_m` its spread from the
    stakes alone, `redundancy` how much of an error in it would show if only it were
    measured (0 to 1). `worst_mdb_m` is the smallest error of the weakest stake that
    the checks up to this one would detect; infinite while a stake has too few.
    """

    first: int
    second: int
    length_m: float
    azimuth_rad: float
    predicted_sd_m: float
    redundancy: float
    worst_mdb_m: float


def rank_checks(
    stakes: ArrayLike,
    *,
    stake_sd_m: float = 0.004,
    tape_sd_m: float = 0.0015,
    count: int | None = None,
) -> tuple[RankedCheck, ...]:
    """The best distances between stakes (n, 2; E, N metres), best first.

    `stake_sd_m` is the standard deviation of a stake coordinate, `tape_sd_m` that of a
    measured distance; `count` how many to rank (by default three a stake). After about
    two a stake every stake is checked in both directions.

    Raises EmptyInput for fewer than two stakes, CoincidentPoints for two in one place.

    >>> square = [(0, 0), (20, 0), (20, 15), (0, 15)]
    >>> best = rank_checks(square, count=6)
    >>> sorted(round(c.length_m, 1) for c in best)
    [15.0, 15.0, 20.0, 20.0, 25.0, 25.0]
    """
    p = checked.points("stakes", stakes)
    if len(p) < 2:
        raise EmptyInput("Checks need at least two stakes.", do="Give more stakes.")
    sd = checked.positive("stake_sd_m", stake_sd_m)
    tape = checked.positive("tape_sd_m", tape_sd_m)
    pairs = list(itertools.combinations(range(len(p)), 2))
    rows, lengths = _design(p, pairs)
    most = min(len(pairs), count if count is not None else 3 * len(p))
    return tuple(_greedy(p, pairs, rows, lengths, sd, tape, most))


def _design(p: Array, pairs: Sequence[tuple[int, int]]) -> tuple[Array, Array]:
    """One row for each pair: how its length changes with every coordinate."""
    first, second = np.array(pairs).T
    d = p[second] - p[first]
    lengths = np.hypot(d[:, 0], d[:, 1])
    if float(lengths.min()) < 1e-6:
        i = int(lengths.argmin())
        raise CoincidentPoints(
            "Two stakes stand in one place.",
            where=f"They are rows {pairs[i][0] + 1} and {pairs[i][1] + 1}.",
            do="Leave one of them out.",
        )
    u = d / lengths[:, None]
    rows = np.zeros((len(pairs), 2 * len(p)))
    at = np.arange(len(pairs))
    for axis in (0, 1):
        rows[at, 2 * first + axis] = -u[:, axis]
        rows[at, 2 * second + axis] = u[:, axis]
    return rows, lengths


def _greedy(
    p: Array,
    pairs: Sequence[tuple[int, int]],
    rows: Array,
    lengths: Array,
    sd: float,
    tape: float,
    most: int,
) -> list[RankedCheck]:
    posterior = np.eye(2 * len(p)) * sd**2
    left = list(range(len(pairs)))
    ranked = []
    for _ in range(most):
        best = max(left, key=lambda i: _gain(posterior, rows[i], pairs[i], sd, tape))
        left.remove(best)
        row = rows[best]
        spread = posterior @ row
        posterior = posterior - np.outer(spread, spread) / (row @ spread + tape**2)
        i, j = pairs[best]
        de, dn = p[j] - p[i]
        q = 2 * sd**2
        ranked.append(
            RankedCheck(
                first=i,
                second=j,
                length_m=float(lengths[best]),
                azimuth_rad=float(np.arctan2(de, dn) % (2 * np.pi)),
                predicted_sd_m=float(np.sqrt(q)),
                redundancy=float(q / (q + tape**2)),
                worst_mdb_m=_worst(posterior, len(p), sd),
            )
        )
    return ranked


def _gain(
    posterior: Array, row: Array, pair: tuple[int, int], sd: float, tape: float
) -> float:
    """By how much more of an error in either of the two stakes would show.

    The weakest direction counts most; the strongest counts a little, for a stake that
    no check reaches yet has to start somewhere.
    """
    spread = posterior @ row
    after = posterior - np.outer(spread, spread) / (row @ spread + tape**2)
    return sum(_worth(after, k, sd) - _worth(posterior, k, sd) for k in pair)


def _worth(posterior: Array, stake: int, sd: float) -> float:
    least, most = _seen(posterior, stake, sd)
    return float(np.log(least + _UNSEEN) + 0.1 * np.log(most + _UNSEEN))


def _seen(posterior: Array, stake: int, sd: float) -> tuple[float, float]:
    """Shares of an error in one stake that the checks see, worst and best direction."""
    block = posterior[2 * stake : 2 * stake + 2, 2 * stake : 2 * stake + 2]
    least, most = np.linalg.eigvalsh(np.eye(2) - block / sd**2)
    return max(float(least), 0.0), max(float(most), 0.0)


def _worst(posterior: Array, stakes: int, sd: float) -> float:
    least = min(_seen(posterior, k, sd)[0] for k in range(stakes))
    if least < _UNSEEN:
        return float("inf")
    return float(sd * np.sqrt(NONCENTRALITY_2D / least))


def diagonal_difference(length_m: float, width_m: float, skew_rad: float) -> float:
    """How much the diagonals of a rectangle differ when it is out of square, metres.

    Equal diagonals prove a rectangle only if opposite sides are equal too.

    >>> round(diagonal_difference(24.0, 18.0, 0.001), 4)
    0.0288
    """
    a, b = checked.positive("length_m", length_m), checked.positive("width_m", width_m)
    skew = checked.number("skew_rad", skew_rad)
    return float(2 * a * b * skew / np.hypot(a, b))
