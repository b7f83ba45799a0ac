"""What residuals say about suspicions: one form for control, benchmarks and epochs.

A suspicion (this mark moved, that measurement is wrong) adds columns C to the model.
All that a test needs of it is C'v and C'RC, with whitened residuals v and their
cofactor R. Adopting a suspicion takes its part out of everything else, without a new
adjustment.

Teunissen 2006 (detection, identification, adaptation); Koch; from memory.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from geometry.checked import Array

Ints = NDArray[np.intp]

RANK_LIMIT = 1e-6
"""Of the prior weight of a mark: less evidence than that in a direction is none."""


@dataclass(frozen=True, slots=True, eq=False)
class Evidence:
    """Evidence about marks of `width` coordinates each, and about m measurements.

    Residuals are adjusted minus measured or recorded. `pull` (k w,) and `strength`
    (k w, k w) are C'v and C'RC of the marks, so that strength^-1 pull is the move;
    `prior` (k,) the weight each mark's rank is
    judged against. `residual` (m,) and `redundancy` (m,) are those of the
    measurements, `shared` (m, k w) their part C_m'RC. `squares` and `dof` belong to
    the whole. `column_of(i)` gives R e_i (m,) of the adjustment, None where only
    marks are suspected; `taken` is what was projected out since.
    """

    width: int
    pull: Array
    strength: Array
    prior: Array
    residual: Array
    redundancy: Array
    shared: Array
    squares: float
    dof: int
    column_of: Callable[[int], Array] | None = None
    taken: tuple[tuple[Array, Array], ...] = field(default=(), repr=False)

    def own(self, mark: int) -> slice:
        """The places of one mark's coordinates."""
        return slice(mark * self.width, (mark + 1) * self.width)

    def places(self, marks: tuple[int, ...]) -> Ints:
        """The places of several marks' coordinates."""
        first = np.array(marks, dtype=np.intp)[:, None] * self.width
        found: Ints = (first + np.arange(self.width)).ravel()
        return found


def inverse_of(block: Array, prior: float) -> tuple[Array, int]:
    """Inverse over the directions with evidence, and how many there are."""
    values, vectors = np.linalg.eigh(0.5 * (block + block.T))
    seen = values > RANK_LIMIT * prior
    kept = vectors[:, seen]
    inverse: Array = (kept / values[seen]) @ kept.T
    return inverse, int(seen.sum())


def without_marks(evidence: Evidence, marks: tuple[int, ...]) -> Evidence:
    """The evidence left once these marks may stand anywhere."""
    at = evidence.places(marks)
    block = evidence.strength[np.ix_(at, at)]
    inverse, rank = inverse_of(block, float(evidence.prior[list(marks)].max()))
    return _without(
        evidence, evidence.strength[:, at], evidence.shared[:, at],
        inverse, evidence.pull[at], rank,
    )  # fmt: skip


def without_measurement(evidence: Evidence, number: int) -> Evidence:
    """The evidence left once one measurement is not believed."""
    if evidence.column_of is None or evidence.redundancy[number] < 1e-9:
        return evidence
    column = evidence.column_of(number)
    for other, inverse in evidence.taken:
        column = column - other @ inverse @ other[number]
    return _without(
        evidence, evidence.shared[number][:, None], column[:, None],
        np.array([[1.0 / column[number]]]),
        evidence.residual[number : number + 1], 1,
    )  # fmt: skip


def _without(
    evidence: Evidence,
    of_marks: Array,
    of_measurements: Array,
    inverse: Array,
    pull: Array,
    rank: int,
) -> Evidence:
    """Project out columns with C_marks'RC, C_measurements'RC, (C'RC)^-1 and C'v."""
    size = inverse @ pull
    spent = float(pull @ size)
    lost = np.einsum("ma,ab,mb->m", of_measurements, inverse, of_measurements)
    return Evidence(
        width=evidence.width,
        pull=evidence.pull - of_marks @ size,
        strength=evidence.strength - of_marks @ inverse @ of_marks.T,
        prior=evidence.prior,
        residual=evidence.residual - of_measurements @ size,
        redundancy=evidence.redundancy - lost,
        shared=evidence.shared - of_measurements @ inverse @ of_marks.T,
        squares=evidence.squares - spent,
        dof=evidence.dof - rank,
        column_of=evidence.column_of,
        taken=(*evidence.taken, (of_measurements, inverse)),
    )
