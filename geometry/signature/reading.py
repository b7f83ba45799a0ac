"""The signature of one setup: why its as-staked shots lie off the design as they do.

Every cause, small and gross, is weighed on the same shots (see weigh); what cannot
be told apart is answered as a set with the shot that would tell. Generalised
likelihood ratio with Schwarz's penalty (1978), random effects for the setup; from
memory.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import WrongShape
from geometry.signature.consensus import consensus
from geometry.signature.describe import Said, describe, mark_name
from geometry.signature.findings import Cause, Signature
from geometry.signature.gross import gross_hypotheses
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.judge import credible, matters, probabilities, verdict
from geometry.signature.kinds import Kind
from geometry.signature.next_shot import next_shot
from geometry.signature.setups import Setup, effects, noise
from geometry.signature.small import small_hypotheses
from geometry.signature.weigh import Evidence, Fit, evidence, weigh
from geometry.signature.words import METRES, Words, stakes
from geometry.verdicts import Verdict

FEWEST = 4
"""Fewer shots tell no pattern from chance."""

_PROMISING = 0.35
_MOST_GROSS = 12
_EXPLAINED = 0.6


@dataclass(frozen=True, slots=True, eq=False)
class Weighed:
    """A hypothesis with its fit."""

    hypothesis: Hypothesis
    fit: Fit


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
        return _not_tested(len(plan))
    fixed_setups = tuple(setups)
    blocks = noise(fixed_setups, plan, checked.positive("point_m", point_m))
    ev = evidence(seen - plan, blocks, *effects(fixed_setups, plan, common_m))
    tried = _weigh_all(
        ev,
        plan,
        seen,
        [
            *small_hypotheses(
                fixed_setups, plan.mean(axis=0), from_grid_origin=from_grid_origin
            ),
            *known,
        ],
        gross_hypotheses(fixed_setups, control, plan, seen),
        _reach(blocks, ev, fixed_setups, plan, common_m),
        rng,
    )
    names = _Names(fixed_setups, tuple(mark_names), words)
    causes = _causes(tried, plan, names)
    found = credible(causes)
    by_cause = {id(c): w for c, w in zip(causes, tried, strict=True)}
    best = by_cause[id(found[0])] if found else _nothing(tried)
    shot = None
    if len(found) > 1:
        pair = [by_cause[id(c)] for c in found[:2]]
        shot = next_shot(
            (pair[0].hypothesis, pair[0].fit),
            (pair[1].hypothesis, pair[1].fit),
            spots,
            fixed_setups,
            plan,
            point_m=point_m,
            words=words,
        )
    answer = verdict(found, tolerance)
    spent = len(best.fit.parameters) + best.hypothesis.spent
    return Signature(
        verdict=answer,
        causes=found if answer is not Verdict.PASS else (),
        weighed=tuple(causes),
        wild=np.flatnonzero(best.fit.wild),
        used=len(plan),
        redundancy=2 * int((~best.fit.wild).sum()) - spent,
        would_see_m=_would_see(tried, plan),
        next_shot=shot if answer is Verdict.AMBIGUOUS else None,
        reason=_reason(answer, found, best.fit, len(plan), tolerance, words),
    )


@dataclass(frozen=True, slots=True)
class _Names:
    setups: tuple[Setup, ...]
    marks: tuple[str, ...]
    words: Words

    def setup(self, number: int | None) -> str:
        if number is None:
            return "the setup"
        return self.setups[number].name or "the setup"


def _weigh_all(
    ev: Evidence,
    plan: Array,
    seen: Array,
    small: Iterable[Hypothesis],
    gross: Iterable[Hypothesis],
    reach: Array,
    rng: np.random.Generator,
) -> list[Weighed]:
    """Small causes all, gross ones where enough shots agree, most probable first."""
    tried = _weighed(ev, plan, small)
    tried += _weighed(ev, plan, _promising(gross, plan, seen - plan, reach))
    if max(w.fit.share for w in tried) < _EXPLAINED:
        tried += _weighed(ev, plan, consensus(plan, seen, reach, rng))
    return sorted(tried, key=lambda w: w.fit.loss)


def _weighed(
    ev: Evidence, plan: Array, hypotheses: Iterable[Hypothesis]
) -> list[Weighed]:
    found = []
    for one in hypotheses:
        fixed, free = one.fixed_at(plan), one.free_at(plan)
        fit = weigh(ev, fixed, free, spent=one.spent, rarity=one.rarity)
        if fit is not None and _within(fit.parameters, one.limits):
            found.append(Weighed(one, fit))
    return found


def _within(parameters: Array, limits: tuple[float, ...]) -> bool:
    return not limits or bool((np.abs(parameters) <= limits).all())


def _promising(
    gross: Iterable[Hypothesis], plan: Array, residuals: Array, reach: Array
) -> list[Hypothesis]:
    """Blunders under which enough shots come near, the best dozen."""
    ranked = []
    for one in gross:
        left = residuals - one.fixed_at(plan)
        share = float((np.hypot(left[:, 0], left[:, 1]) < reach).mean())
        if share >= _PROMISING:
            ranked.append((share, one))
    ranked.sort(key=lambda pair: -pair[0])
    return [one for _, one in ranked[:_MOST_GROSS]]


def _reach(
    blocks: Array, ev: Evidence, setups: tuple[Setup, ...], plan: Array, common_m: float
) -> Array:
    """How far (n,) an honest shot may lie off, setup effects included; metres."""
    fields, variances = effects(setups, plan, common_m)
    spread = np.einsum("nqm,m->n", fields**2, variances)
    reach = np.sqrt(ev.cut * (np.einsum("nii->n", blocks) + spread))
    return np.asarray(reach)


def _causes(tried: Sequence[Weighed], plan: Array, names: _Names) -> list[Cause]:
    chances = probabilities([w.fit.loss for w in tried])
    return [
        _cause(w, float(chance), plan, names)
        for w, chance in zip(tried, chances, strict=True)
    ]


def _cause(w: Weighed, probability: float, plan: Array, names: _Names) -> Cause:
    one, fit = w.hypothesis, w.fit
    field = one.fixed_at(plan) + one.free_at(plan) @ fit.parameters
    effect = float(np.hypot(field[:, 0], field[:, 1]).max())
    parameters = fit.parameters + np.array(one.base) if one.base else fit.parameters
    said = Said(
        parameters=tuple(parameters.tolist()),
        effect_m=effect,
        setup=names.setup(one.setup),
        mark=mark_name(names.marks, one.mark),
        about=one.about,
        words=names.words,
    )
    sentence = describe(one.kind, said)
    return Cause(
        kind=one.kind,
        parameters=parameters,
        covariance=fit.covariance,
        probability=probability,
        loss=fit.loss,
        effect_m=effect,
        share=fit.share,
        setup=one.setup,
        mark=one.mark,
        about=one.about,
        sentence=sentence[0].upper() + sentence[1:],
    )


def _nothing(tried: Sequence[Weighed]) -> Weighed:
    return next(w for w in tried if w.hypothesis.kind is Kind.NOTHING)


def _would_see(tried: Sequence[Weighed], plan: Array) -> float | None:
    """The worst of the one-parameter causes: its least effect seen four times in five."""
    worst = None
    for w in tried:
        if len(w.fit.parameters) != 1 or w.hypothesis.spent:
            continue
        field = w.hypothesis.free_at(plan)[:, :, 0]
        reach = float(np.hypot(field[:, 0], field[:, 1]).max())
        threshold = math.sqrt(6.9 + math.log(2 * len(plan)))
        least = (threshold + 0.8416) * math.sqrt(w.fit.covariance[0, 0]) * reach
        worst = least if worst is None else max(worst, least)
    return worst


def _reason(
    answer: Verdict,
    found: Sequence[Cause],
    fit: Fit,
    count: int,
    tolerance_m: float,
    words: Words,
) -> str:
    wild = int(fit.wild.sum())
    alone = (
        f" {stakes(wild).capitalize()} off on {'its' if wild == 1 else 'their'} own."
    )
    tail = alone if wild else ""
    if answer is Verdict.FAIL:
        return found[0].sentence + tail
    if answer is Verdict.AMBIGUOUS:
        rest = " Or: ".join(cause.sentence for cause in found)
        return (
            f"One of {len(found)} causes, not told apart by these shots. {rest}{tail}"
        )
    if found and not any(matters(cause, tolerance_m) for cause in found):
        size = words.length(max(cause.effect_m for cause in found))
        return (
            f"{found[0].sentence} At most {size}, below a third of the "
            f"tolerance: it does not matter.{tail}"
        )
    return f"Nothing systematic in {stakes(count)}.{tail}"


def _not_tested(count: int) -> Signature:
    return Signature(
        verdict=Verdict.NOT_TESTED,
        causes=(),
        weighed=(),
        wild=np.zeros(0, dtype=np.int64),
        used=count,
        redundancy=0,
        would_see_m=None,
        next_shot=None,
        reason=f"{stakes(count).capitalize()}: too few to show a pattern; shoot at "
        f"least {FEWEST}.",
    )
