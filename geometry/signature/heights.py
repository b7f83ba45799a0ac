"""The signature of heights: why as-staked elevations lie off the design as they do.

One number per shot, weighed as the plane ones are. A rod or instrument height is the
same at any distance, a vertical angle grows with it, curvature with its square, a
tilt with position; the sign of a cut and the wrong reference surface have fields that
are known beforehand. Height of instrument and vertical index are random effects.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import WrongShape
from geometry.signature.answer import FEWEST, Names, answered, not_tested
from geometry.signature.findings import NextShot, Signature
from geometry.signature.height_causes import height_causes
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.kinds import Kind
from geometry.signature.next_shot import next_shot
from geometry.signature.round_steps import named_step
from geometry.signature.setups import Setup
from geometry.signature.trying import Weighed, weigh_each
from geometry.signature.weigh import evidence
from geometry.signature.words import METRES, Words

_OF_THE_LIST = frozenset({Kind.ROD, Kind.HEIGHT_FROM, Kind.SIGN, Kind.REFERENCE})
"""Causes that belong to certain shots, so no other place foretells them."""

_WORTH_M = 0.005


def height_signature(
    points: ArrayLike,
    differences_m: ArrayLike,
    setups: Sequence[Setup] = (),
    *,
    rods: Sequence[str] = (),
    cuts_m: ArrayLike | None = None,
    references: Mapping[str, ArrayLike] | None = None,
    tolerance_m: float = 0.010,
    point_m: float = 0.002,
    height_m: float = 0.002,
    index_rad: float = math.radians(4 / 3600),
    known: Iterable[Hypothesis] = (),
    candidates: ArrayLike = (),
    words: Words = METRES,
) -> Signature:
    """Read height differences (n,), shot less design, of points (n, 2); metres.

    Rows in the order they were shot. `rods` names each shot's rod setting, `cuts_m`
    (n,) is the cut each stake called for, `references` how far other surfaces lie
    above the one the plan refers to (one number, or one per shot). Standard
    deviations: `point_m` of a shot, `height_m` of the common height (benchmark and
    instrument), `index_rad` of the vertical index, and the setups' direction for a
    single vertical angle. A satellite or levelled job has no setup.

    >>> rng = np.random.default_rng(2)
    >>> where = rng.uniform(-60, 60, (20, 2))
    >>> found = height_signature(where, 0.1 + rng.normal(0, 0.002, 20))
    >>> found.kind.value, round(float(found.causes[0].parameters[0]), 2)
    ('constant height', 0.1)

    Fewer than four shots are not tested. Raises WrongShape, NotFinite, OutOfRange.
    """
    plan = checked.points("points", points)
    dz = checked.numbers("differences", differences_m)
    _same("difference", dz.size, len(plan))
    tolerance = checked.positive("tolerance_m", tolerance_m)
    if len(plan) < FEWEST:
        return not_tested(len(plan))
    fixed_setups = tuple(setups)

    def spread(spots: Array) -> Array:
        return _noise(fixed_setups, spots, checked.positive("point_m", point_m))

    common = _effects(fixed_setups, plan, height_m, index_rad)
    ev = evidence(dz[:, None], spread(plan), *common)
    causes = height_causes(
        fixed_setups,
        plan,
        dz,
        rods=_per_shot("rod setting", rods, len(plan)),
        cuts=_optional("cut", cuts_m, len(plan)),
        references={
            name: _optional("reference height", value, len(plan))
            for name, value in (references or {}).items()
        },
    )
    tried = [named_step(w, words) for w in weigh_each(ev, plan, [*causes, *known])]
    spots = checked.points("candidates", candidates)

    def tell(first: Weighed, second: Weighed) -> NextShot:
        if {first.hypothesis.kind, second.hypothesis.kind} & _OF_THE_LIST:
            return _reshoot(first, second, plan, words)
        pair = (first.hypothesis, first.fit), (second.hypothesis, second.fit)
        return next_shot(*pair, spots, fixed_setups, plan, spread, words)

    return answered(tried, plan, Names(fixed_setups, (), words), tolerance, tell)


def _noise(setups: tuple[Setup, ...], spots: Array, point_m: float) -> Array:
    variance = np.full(len(spots), point_m**2)
    for one in setups:
        variance += (one.direction_rad * np.hypot(*(spots - one.at).T)) ** 2
    return variance[:, None, None]


def _effects(
    setups: tuple[Setup, ...], plan: Array, height_m: float, index_rad: float
) -> tuple[Array, Array]:
    columns, variances = [np.ones(len(plan))], [checked.number("height_m", height_m)]
    for one in setups:
        columns.append(np.hypot(*(plan - one.at).T))
        variances.append(checked.number("index_rad", index_rad))
    kept = [v > 0 for v in variances]
    fields = np.column_stack(columns)[:, None, :]
    return fields[:, :, kept], np.square(variances)[kept]


def _reshoot(first: Weighed, second: Weighed, plan: Array, words: Words) -> NextShot:
    """Where two causes differ most among the shots already taken."""
    a, b = (
        w.hypothesis.fixed_at(plan) + w.hypothesis.free_at(plan) @ w.fit.parameters
        for w in (first, second)
    )
    gaps = np.abs(a - b)[:, 0]
    row = int(np.argmax(gaps))
    gap = float(gaps[row])
    again = (
        f" Then stake {row + 1} of the list again, where the two causes differ by "
        f"{words.length(gap)}."
    )
    return NextShot(
        point=plan[row],
        candidate=None,
        differ_m=gap,
        times=0.0,
        decides=False,
        sentence="Shoot a benchmark with each rod setting that was used: an error of "
        "instrument or rod shows there, one of the plan does not."
        + (again if gap > _WORTH_M else ""),
    )


def _same(name: str, count: int, points: int) -> None:
    if count != points:
        raise WrongShape(
            f"Every shot needs one {name}.", where=f"{count} for {points} shots."
        )


def _per_shot(name: str, values: Sequence[str], count: int) -> tuple[str, ...]:
    if values:
        _same(name, len(values), count)
    return tuple(values)


def _optional(name: str, values: ArrayLike | None, count: int) -> Array | None:
    if values is None:
        return None
    array = checked.numbers(f"{name}s", values)
    if array.size == 1:
        return np.full(count, array[0])
    _same(name, array.size, count)
    return array
