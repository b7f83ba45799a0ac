"""From weighed causes to the answer that is shown: verdict, set, sentence, numbers."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from geometry.checked import Array
from geometry.signature.describe import Said, describe, mark_name
from geometry.signature.findings import Cause, NextShot, Signature
from geometry.signature.judge import OVER_NOTHING, credible, probabilities, verdict
from geometry.signature.kinds import Kind
from geometry.signature.setups import Setup
from geometry.signature.trying import Weighed
from geometry.signature.weigh import Fit
from geometry.signature.words import Words, stakes
from geometry.verdicts import Verdict

FEWEST = 4
"""Fewer shots tell no pattern from chance."""

_POWER_80 = 0.8416

Next = Callable[[Weighed, Weighed], NextShot]


@dataclass(frozen=True, slots=True)
class Names:
    """What sentences call things, and in which unit."""

    setups: tuple[Setup, ...]
    marks: tuple[str, ...]
    words: Words

    def setup(self, number: int | None) -> str:
        """A setup's name, or just the setup."""
        if number is None:
            return "the setup"
        return self.setups[number].name or "the setup"


def answered(
    tried: Sequence[Weighed],
    points: Array,
    names: Names,
    tolerance_m: float,
    next_shot: Next,
) -> Signature:
    """The signature that the weighed causes, in any order, amount to."""
    tried = sorted(tried, key=lambda w: w.fit.loss)
    chances = probabilities([w.fit.loss for w in tried])
    causes = [
        _cause(w, float(chance), points, names)
        for w, chance in zip(tried, chances, strict=True)
    ]
    found = credible(causes)
    best = tried[causes.index(found[0])] if found else _nothing(tried)
    answer = verdict(found, tolerance_m)
    shot = None
    if answer is Verdict.AMBIGUOUS:
        shot = next_shot(best, tried[causes.index(found[1])])
    kept = best.hypothesis.rows * int((~best.fit.wild).sum())
    return Signature(
        verdict=answer,
        causes=found if answer is not Verdict.PASS else (),
        weighed=tuple(causes),
        wild=np.flatnonzero(best.fit.wild),
        used=len(points),
        redundancy=kept - len(best.fit.parameters) - best.hypothesis.spent,
        would_see_m=_would_see(tried, points) if answer is Verdict.PASS else None,
        next_shot=shot,
        reason=_reason(answer, found, best.fit, len(points), names.words),
    )


def _cause(w: Weighed, probability: float, points: Array, names: Names) -> Cause:
    one, fit = w.hypothesis, w.fit
    field = one.fixed_at(points) + one.free_at(points) @ fit.parameters
    effect = float(np.linalg.norm(field, axis=1).max())
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


def _would_see(tried: Sequence[Weighed], points: Array) -> float | None:
    """The worst of the one-parameter causes: its least effect seen four times in five."""
    worst = None
    for w in tried:
        if len(w.fit.parameters) != 1 or w.hypothesis.spent or w.hypothesis.base:
            continue
        field = w.hypothesis.free_at(points)[:, :, 0]
        reach = float(np.linalg.norm(field, axis=1).max())
        threshold = math.sqrt(OVER_NOTHING + math.log(field.size))
        least = (threshold + _POWER_80) * math.sqrt(w.fit.covariance[0, 0]) * reach
        worst = least if worst is None else max(worst, least)
    return worst


def _reason(
    answer: Verdict,
    found: Sequence[Cause],
    fit: Fit,
    count: int,
    words: Words,
) -> str:
    wild = int(fit.wild.sum())
    own = "its" if wild == 1 else "their"
    tail = f" {stakes(wild).capitalize()} off on {own} own." if wild else ""
    if answer is Verdict.FAIL:
        return found[0].sentence + tail
    if answer is Verdict.AMBIGUOUS:
        rest = " Or: ".join(cause.sentence for cause in found)
        return (
            f"One of {len(found)} causes, not told apart by these shots. {rest}{tail}"
        )
    if found:
        size = words.length(max(cause.effect_m for cause in found))
        return (
            f"{found[0].sentence} At most {size}, below a third of the "
            f"tolerance: it does not matter.{tail}"
        )
    return f"Nothing systematic in {stakes(count)}.{tail}"


def not_tested(count: int) -> Signature:
    """The answer when there is too little to read."""
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
