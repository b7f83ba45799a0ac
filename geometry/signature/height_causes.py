"""The causes heights can have, as fields over the shots."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence

import numpy as np

from geometry.checked import Array
from geometry.signature.hypotheses import Field, Hypothesis
from geometry.signature.kinds import Kind
from geometry.signature.setups import Role, Setup
from geometry.signature.small import TWO_AT_ONCE

CURVATURE_PER_M = 0.0675e-6
"""Combined curvature and refraction, 0.0675 m at 1 km for k = 0.14 (K of m² in m)."""


def height_causes(
    setups: tuple[Setup, ...],
    plan: Array,
    dz: Array,
    *,
    rods: Sequence[str],
    cuts: Array | None,
    references: Mapping[str, Array | None],
) -> Iterator[Hypothesis]:
    """Nothing, and every cause these shots can speak of."""
    yield Hypothesis(Kind.NOTHING, rows=1)
    yield Hypothesis(Kind.HEIGHT_CONSTANT, free=_ones, rows=1)
    yield _tilt(plan.mean(axis=0), rare=bool(setups))
    yield from _changed(plan, dz)
    yield from _per_rod(plan, rods)
    for number, one in enumerate(setups):
        yield from _with_distance(number, one)
    if cuts is not None:
        yield Hypothesis(Kind.SIGN, fixed=_rows(plan, 2 * cuts), rows=1)
    for name, height in references.items():
        if height is not None:
            field = _rows(plan, height)
            yield Hypothesis(Kind.REFERENCE, fixed=field, about=name, rows=1)


def _ones(points: Array) -> Array:
    return np.ones((len(points), 1, 1))


def _tilt(centre: Array, *, rare: bool) -> Hypothesis:
    """A tilted plane: an everyday localisation error, a rare one of an instrument."""

    def field(points: Array) -> Array:
        return np.column_stack([np.ones(len(points)), points - centre])[:, None, :]

    return Hypothesis(
        Kind.TILT, free=field, rarity=TWO_AT_ONCE if rare else 0.0, rows=1
    )


def _with_distance(number: int, one: Setup) -> Iterator[Hypothesis]:
    def distance(points: Array) -> Array:
        away: Array = np.hypot(*(points - one.at).T)
        return away[:, None]

    # uncorrected heights come out too low: shots lie low, stakes are set high
    sign = 1.0 if one.role is Role.STAKED else -1.0
    yield Hypothesis(
        Kind.HEIGHT_ANGLE, free=lambda p: distance(p)[:, :, None], setup=number, rows=1
    )
    yield Hypothesis(
        Kind.CURVATURE,
        fixed=lambda p: sign * CURVATURE_PER_M * distance(p) ** 2,
        setup=number,
        rows=1,
    )


def _per_rod(plan: Array, rods: Sequence[str]) -> Iterator[Hypothesis]:
    names = sorted(set(rods))
    if len(names) < 2:
        return
    for name in names:
        with_it = np.array([rod == name for rod in rods], dtype=np.float64)
        yield Hypothesis(
            Kind.ROD, free=_column(plan, with_it), about=name or "(none)", rows=1
        )


def _changed(plan: Array, dz: Array) -> Iterator[Hypothesis]:
    """From some shot on: the split that tells most, its place paid for once."""
    n = len(dz)
    if n < 6:
        return
    low, high = np.quantile(dz, [0.05, 0.95])
    held = np.clip(dz, low, high)
    splits = np.arange(2, n - 1)
    before = np.cumsum(held)[splits - 1] / splits
    after = (held.sum() - before * splits) / (n - splits)
    gain = (after - before) ** 2 * splits * (n - splits) / n
    at = int(splits[int(np.argmax(gain))])
    later = (np.arange(n) >= at).astype(np.float64)
    yield Hypothesis(
        Kind.HEIGHT_FROM, free=_column(plan, later), spent=1, about=str(at + 1), rows=1
    )


def _column(plan: Array, values: Array) -> Field:
    """A field that belongs to the shots of the list: one elsewhere means nothing."""
    rows = _rows(plan, values)
    return lambda points: rows(points)[:, :, None]


def _rows(plan: Array, values: Array) -> Field:
    def field(points: Array) -> Array:
        same = points.shape == plan.shape and bool((points == plan).all())
        return values[:, None] if same else np.zeros((len(points), 1))

    return field
