"""Residuals, redundancy numbers and reliability of every measurement at an estimate.

Whitened throughout: multiply a residual or a detectable error by sigma for its unit.
A measurement left out is judged against the prediction of all the others. Baarda 1968
for redundancy, minimal detectable bias and external reliability.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.adjust.datum import Datum, moved_to_datum
from geometry.adjust.frontal import Factor
from geometry.adjust.iterate import (
    SMALLEST_REDUNDANCY,
    Estimate,
    columns_of_inverse,
)
from geometry.adjust.reliability import detectable
from geometry.adjust.rows import Flags, Group, Ints, picked
from geometry.adjust.selected import inverse_blocks
from geometry.checked import Array


@dataclass(frozen=True, slots=True, eq=False)
class Assessment:
    """A number for each measurement, (m,); a covariance for each point, (n, w, w).

    `residual` is adjusted minus measured over sigma; `w` that over its own standard
    deviation (0 where uncontrolled); `detectable` the minimal detectable bias over
    sigma and `effect_m` the largest shift of its own points by an error of that size
    (both inf where uncontrolled).
    """

    residual: Array
    redundancy: Array
    controlled: Flags
    w: Array
    detectable: Array
    effect_m: Array
    covariances: Array


def assess(
    found: Estimate,
    columns: Ints,
    ends: Ints,
    datum: Datum | None,
    alpha: float,
    power: float,
) -> Assessment:
    """Judge every measurement.

    `columns` (n, w) are the unknowns of each point, -1 where held; `ends` (m, e) the
    points of each measurement in the order of its coefficients, -1 where unused.
    """
    rows = found.rows
    by_row, by_point = inverse_blocks(found.factor, [rows.columns, columns])
    c = np.where(rows.columns >= 0, rows.coefficients, 0.0)
    pulled = np.einsum("rab,rb->ra", by_row, c)
    leverage = np.einsum("ra,ra->r", c, pulled)
    active = found.weights > 0
    redundancy = np.where(active, np.maximum(1.0 - leverage, 0.0), 0.0)
    controlled = redundancy >= SMALLEST_REDUNDANCY
    variance = np.where(active, redundancy, 1.0 + leverage)
    spread = np.sqrt(np.maximum(variance, SMALLEST_REDUNDANCY))
    residual = -rows.misclosure
    shift = _shift_of_ends(pulled, c, rows.columns, columns, ends, datum)
    bias = detectable(alpha, power) / spread
    return Assessment(
        residual=residual,
        redundancy=redundancy,
        controlled=controlled,
        w=np.where(controlled | ~active, residual / spread, 0.0),
        detectable=np.where(controlled, bias, np.inf),
        effect_m=np.where(controlled, bias * shift, np.inf),
        covariances=_covariances(by_point, columns, datum),
    )


def _covariances(blocks: Array, columns: Ints, datum: Datum | None) -> Array:
    if datum is None:
        return blocks
    at = np.arange(columns.size).reshape(columns.shape)
    return moved_to_datum(datum, blocks, at, columns)


def _shift_of_ends(
    pulled: Array,
    coefficients: Array,
    row_columns: Ints,
    columns: Ints,
    ends: Ints,
    datum: Datum | None,
) -> Array:
    """The longest shift among the ends of each row for a whitened error of 1."""
    width, each = columns.shape[1], ends.shape[1]
    at = (ends[:, :, None] * width + np.arange(width)).reshape(-1, each * width)
    used = np.repeat(ends >= 0, width, axis=1)
    shift = np.where(used, pulled[:, : at.shape[1]], 0.0)
    if datum is not None:
        carried = picked(datum.carried, row_columns)
        motion = np.einsum("ra,rad->rd", coefficients, carried)
        back = np.einsum("rad,rd->ra", datum.spread[np.where(used, at, 0)], motion)
        shift = np.where(used, shift - back, 0.0)
    by_end = shift.reshape(-1, each, width)
    longest: Array = np.sqrt((by_end**2).sum(axis=2)).max(axis=1, initial=0.0)
    return longest


@dataclass(frozen=True, slots=True, eq=False)
class KnownAssessment:
    """Known coordinates of one group against the adjustment, each array (k,).

    `difference_m` is adjusted minus known, `w` its test by the correlated formula,
    `pull` the vector P v itself and `evidence` (k, k) its cofactor P - P Q P.
    """

    difference_m: Array
    redundancy: Array
    w: Array
    detectable_m: Array
    pull: Array
    evidence: Array


def assess_known(
    group: Group, factor: Factor, count: int, alpha: float, power: float
) -> KnownAssessment:
    """Judge a group of correlated known values: w = c'Pv / sqrt(c'P Qv P c)."""
    weight = group.weight
    inverse = columns_of_inverse(factor, group.columns, count)
    q = picked(inverse, group.columns)
    evidence = weight - weight @ q @ weight
    pull = -(weight @ group.misclosure)
    redundancy = 1.0 - np.einsum("ab,ba->a", q, weight)
    strength = np.diag(evidence) / np.diag(weight)
    sound = strength >= SMALLEST_REDUNDANCY * 1e-4
    size = np.sqrt(np.where(sound, np.diag(evidence), 1.0))
    return KnownAssessment(
        difference_m=-group.misclosure,
        redundancy=redundancy,
        w=np.where(sound, pull / size, 0.0),
        detectable_m=np.where(sound, detectable(alpha, power) / size, np.inf),
        pull=pull,
        evidence=0.5 * (evidence + evidence.T),
    )
