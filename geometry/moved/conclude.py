"""From the end of a search to the answer: moves, sets, and a verdict for each mark."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

import numpy as np
from scipy import special

from geometry.adjust.reliability import GlobalTest, global_test
from geometry.checked import Array
from geometry.ellipse import ellipse
from geometry.moved.answer import MarkReport, Move, MovedAnswer, Suspects, Tell
from geometry.moved.evidence import Evidence, inverse_of
from geometry.moved.search import Found, search
from geometry.moved.suspicion import (
    Suspicion,
    mark_statistic,
    smallest_moves,
    without,
)
from geometry.verdicts import Verdict

Teller = Callable[[Sequence[Suspicion]], Tell | None]


def conclude(
    evidence: Evidence,
    names: Sequence[str],
    words: Sequence[str],
    alpha: float,
    power: float,
    global_alpha: float,
    teller: Teller,
) -> MovedAnswer:
    """Search the evidence and say what was found.

    `names` are the marks, `words` the measurements; `teller` proposes a measurement
    for a set of suspects.
    """
    found = search(evidence, alpha)
    seen = [mark_statistic(evidence, i)[0] for i in range(len(names))]
    tested = max(sum(rank > 0 for rank in seen), 1)
    limit = alpha / tested
    named = [s for s in found.named if s.is_mark]
    wrong = tuple(s.index for s in found.named if not s.is_mark)
    reports = tuple(
        _report(evidence, found, names[i], i, limit, power) for i in range(len(names))
    )
    test = global_test(evidence.squares, evidence.dof, global_alpha)
    left = global_test(max(found.left.squares, 0.0), found.left.dof, global_alpha)
    verdict, reason = _whole(found, test, left, sum(seen))
    return MovedAnswer(
        verdict=verdict,
        reason=reason,
        marks=reports,
        moved=_joint_moves(evidence, found, named, names, limit),
        suspects=tuple(
            _suspects(evidence, found, group, names, words, limit, teller)
            for group in found.sets
        ),
        wrong_measurements=wrong,
        wrong_words=tuple(words[i] for i in wrong),
        not_tested=tuple(n for n, rank in zip(names, seen, strict=True) if not rank),
        test=test,
        left=left,
        alpha=alpha,
        power=power,
        marks_used=tuple(n for n, rank in zip(names, seen, strict=True) if rank),
        evidence=evidence,
    )


def _joint_moves(
    evidence: Evidence,
    found: Found,
    named: list[Suspicion],
    names: Sequence[str],
    limit: float,
) -> tuple[Move, ...]:
    """All named marks estimated together, the rest of what was found taken out."""
    for one in found.named:
        if not one.is_mark:
            evidence = without(evidence, one)
    for group in found.sets:
        for one in group:
            evidence = without(evidence, one)
    if not named:
        return ()
    at = evidence.places(tuple(s.index for s in named))
    prior = float(evidence.prior[[s.index for s in named]].max())
    inverse, _ = inverse_of(evidence.strength[np.ix_(at, at)], prior)
    moves = inverse @ evidence.pull[at]
    width = evidence.width
    return tuple(
        _move(
            names[one.index], moves[k * width : (k + 1) * width],
            inverse[k * width : (k + 1) * width, k * width : (k + 1) * width],
            one, limit,
        )
        for k, one in enumerate(named)
    )  # fmt: skip


def _move(
    name: str, move: Array, covariance: Array, one: Suspicion, limit: float
) -> Move:
    critical = float(special.chdtri(one.rank, limit))
    full = len(move) == 2 and one.rank == 2
    sure = full and one.statistic > 2 * critical
    return Move(
        mark=name,
        move_m=move,
        covariance_m2=covariance,
        ellipse_95=ellipse(covariance) if sure else None,
        statistic=one.statistic,
        p_value=math.exp(one.log_p),
    )


def _suspects(
    evidence: Evidence,
    found: Found,
    group: tuple[Suspicion, ...],
    names: Sequence[str],
    words: Sequence[str],
    limit: float,
    teller: Teller,
) -> Suspects:
    for one in found.named:
        evidence = without(evidence, one)
    # In the order of the marks: the order of the scores would read like a ranking.
    group = tuple(sorted(group, key=lambda s: (not s.is_mark, s.index)))
    moves = []
    for one in (s for s in group if s.is_mark):
        own = evidence.own(one.index)
        prior = float(evidence.prior[one.index])
        inverse, _ = inverse_of(evidence.strength[own, own], prior)
        move = inverse @ evidence.pull[own]
        moves.append(_move(names[one.index], move, inverse, one, limit))
    numbers = tuple(s.index for s in group if not s.is_mark)
    return Suspects(
        tuple(moves), numbers, tuple(words[i] for i in numbers), teller(group)
    )


def _report(
    evidence: Evidence, found: Found, name: str, mark: int, limit: float, power: float
) -> MarkReport:
    rank, statistic = mark_statistic(evidence, mark)
    best, worst, way = smallest_moves(evidence, mark, limit, power)
    verdict, reason = _verdict(evidence.width, found, mark, rank)
    azimuth = None
    if way is not None and len(way) == 2:
        azimuth = math.atan2(way[0], way[1]) % math.pi
    return MarkReport(
        mark=name,
        verdict=verdict,
        reason=reason,
        rank=rank,
        statistic=statistic if rank else None,
        p_value=float(special.chdtrc(rank, statistic)) if rank else None,
        smallest_m=worst,
        smallest_best_m=best,
        best_rad=azimuth,
    )


def _verdict(width: int, found: Found, mark: int, rank: int) -> tuple[Verdict, str]:
    if any(s.is_mark and s.index == mark for s in found.named):
        return Verdict.FAIL, "It moved."
    if any(s.is_mark and s.index == mark for group in found.sets for s in group):
        return Verdict.AMBIGUOUS, "It, or another that explains the same, moved."
    if not rank:
        return Verdict.NOT_TESTED, "No spare measurement reaches it."
    if rank < width:
        return Verdict.UNDECIDED, "It was seen in one direction only; there it stands."
    return Verdict.PASS, "No move larger than could be seen."


def _whole(
    found: Found, test: GlobalTest, left: GlobalTest, seen: int
) -> tuple[Verdict, str]:
    if not test.dof or not seen:
        return Verdict.NOT_TESTED, "There is no measurement to spare: nothing checks."
    if found.sets:
        return Verdict.AMBIGUOUS, "Something moved, and more than one could be it."
    if found.named:
        marks = any(s.is_mark for s in found.named)
        what = "A mark moved." if marks else "A measurement is wrong, no mark moved."
        rest = " The rest agrees."
        if left.verdict == Verdict.FAIL:
            rest = " The rest still does not agree well."
        return Verdict.FAIL, what + rest
    if test.verdict == Verdict.FAIL:
        return (
            Verdict.UNDECIDED,
            "The measurements fit the record worse than they should, "
            "and no single mark explains it.",
        )
    return Verdict.PASS, "No mark moved by more than could be seen."
