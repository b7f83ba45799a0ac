"""The signature of one setup: why its as-staked shots lie off the design as they do.

Every cause, small and gross, is weighed on the same shots (see weigh); what cannot
be told apart is answered as a set with the shot that would tell. Generalised
likelihood ratio with Schwarz's penalty (1978), random effects for the setup; from
memory.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from functools import partial

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import WrongShape
from geometry.signature.answer import FEWEST, Names, answered, not_tested
from geometry.signature.consensus import consensus
from geometry.signature.findings import NextShot, Signature
from geometry.signature.gross import gross_hypotheses
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.next_shot import next_shot
from geometry.signature.setups import Setup, effects, noise
from geometry.signature.small import small_hypotheses
from geometry.signature.trying import Weighed, promising, weigh_each
from geometry.signature.weigh import evidence
from geometry.signature.words import METRES, Words

_EXPLAINED = 0.6


def signature(
    design: ArrayLike,
    shots: ArrayLike,
    setups: Sequence[Setup] = (),
    *,
    marks: ArrayLike = (),
    mark_names: Sequence[str] = (),
    tolerance_m: float = 0.015,
    point_m: float = 0.003,
    common_m: float = 0.0,
    from_grid_origin: bool = False,
    known: Iterable[Hypothesis] = (),
    candidates: ArrayLike = (),
    words: Words = METRES,
    rng: np.random.Generator,
) -> Signature:
    """Read the residuals of shots (n, 2) of design points (n, 2), paired by row.

    `setups` are the one that staked and the one that shot, as far as known; `marks`
    (m, 2) the control a crew could have taken by mistake. `point_m` is the standard
    deviation of setting and marking a point, `common_m` that of a common shift owed
    to no setup. `known` are causes with a known field, `candidates` (c, 2) places
    where another shot could be taken. All E, N in metres. `rng` draws the pairs of
    the consensus search and nothing else.

    >>> from geometry.signature import setup
    >>> rng = np.random.default_rng(1)
    >>> design = rng.uniform(10, 80, (12, 2))
    >>> ray = design / np.hypot(*design.T)[:, None]
    >>> shots = design + 0.03 * ray + rng.normal(0, 0.002, (12, 2))
    >>> far = [(-20.0, -15.0), (5.0, -30.0)]
    >>> found = signature(design, shots, [setup((0, 0))], candidates=far, rng=rng)
    >>> found.kind.value, found.verdict.value
    ('prism constant', 'fail')

    Fewer than four shots are not tested. Raises WrongShape when rows do not pair,
    NotFinite, OutOfRange.
    """
    plan, seen = checked.points("design", design), checked.points("shots", shots)
    if plan.shape != seen.shape:
        raise WrongShape(
            "Every shot needs its design point.",
            where=f"{len(plan)} design points, {len(seen)} shots.",
        )
    tolerance = checked.positive("tolerance_m", tolerance_m)
    control = checked.points("marks", marks)
    spots = checked.points("candidates", candidates)
    if len(plan) < FEWEST:
        return not_tested(len(plan))
    fixed_setups = tuple(setups)
    blocks = noise(fixed_setups, plan, checked.positive("point_m", point_m))
    common = effects(fixed_setups, plan, common_m)
    ev = evidence(seen - plan, blocks, *common)
    centre = plan.mean(axis=0)
    small = small_hypotheses(fixed_setups, centre, from_grid_origin=from_grid_origin)
    tried = weigh_each(ev, plan, [*small, *known])
    reach = _reach(blocks, ev.cut, *common)
    gross = gross_hypotheses(fixed_setups, control, plan, seen)
    tried += weigh_each(ev, plan, promising(gross, plan, seen - plan, reach))
    if max(w.fit.share for w in tried) < _EXPLAINED:
        tried += weigh_each(ev, plan, consensus(plan, seen, reach, rng))

    def tell(first: Weighed, second: Weighed) -> NextShot:
        pair = (first.hypothesis, first.fit), (second.hypothesis, second.fit)
        spread = partial(noise, fixed_setups, point_m=point_m)
        return next_shot(*pair, spots, fixed_setups, plan, spread, words)

    names = Names(fixed_setups, tuple(mark_names), words)
    return answered(tried, plan, names, tolerance, tell)


def _reach(blocks: Array, cut: float, fields: Array, variances: Array) -> Array:
    """How far (n,) an honest shot may lie off, setup effects included; metres."""
    spread = np.einsum("nqm,m->n", fields**2, variances)
    reach = np.sqrt(cut * (np.einsum("nii->n", blocks) + spread))
    return np.asarray(reach)
