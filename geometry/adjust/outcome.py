"""From the end of the search for blunders to the figures every adjustment reports."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from geometry.adjust.assess import Assessment, assess, assess_known
from geometry.adjust.datum import Datum
from geometry.adjust.iterate import SMALLEST_REDUNDANCY
from geometry.adjust.measurements import Measurements
from geometry.adjust.observations import HeightDifference, PlaneObservation
from geometry.adjust.reliability import GlobalTest, critical_w, global_test
from geometry.adjust.report import GroupPrecision, KnownReport
from geometry.adjust.rows import Ints
from geometry.adjust.snooping import Snooped, removal_alpha, removal_limit
from geometry.adjust.solution import Solution
from geometry.checked import Array
from geometry.verdicts import Verdict

FEWEST_FOR_FACTOR = 20.0


@dataclass(frozen=True, slots=True, eq=False)
class Outcome:
    """Figures shared by level and plane adjustments."""

    assessment: Assessment
    solution: Solution
    test: GlobalTest
    verdicts: tuple[Verdict, ...]
    known: tuple[KnownReport, ...]
    unchecked: tuple[str, ...]
    verdict: Verdict
    reason: str


def outcome(
    searched: Snooped,
    names: Sequence[str],
    columns: Ints,
    ends: Ints,
    known_at: Sequence[Ints],
    datum: Datum | None,
    alpha: float,
    power: float,
    global_alpha: float,
) -> Outcome:
    """Assess an adjustment whose search has ended.

    `columns` (n, w) unknowns of each point; `ends` (m, e) points of each measurement;
    `known_at` the points of each group of known values.
    """
    found = searched.found
    # An error is promised to be found only by the limit that is really applied.
    applied = removal_alpha(len(searched.weights), alpha)
    judged = assess(found, columns, ends, datum, applied, power)
    solution = Solution(found.factor, columns, datum)
    dof = _degrees(searched, len(found.unknowns))
    test = global_test(found.squares, dof, global_alpha)
    verdicts = _verdicts(searched, judged, alpha)
    width = columns.shape[1]
    known = _known(searched, names, known_at, width, alpha, power)
    verdict, reason = _whole(searched, test, verdicts, known)
    unchecked = _unchecked(searched, judged, names, columns, solution)
    return Outcome(judged, solution, test, verdicts, known, unchecked, verdict, reason)


def _degrees(searched: Snooped, unknowns: int) -> int:
    used = int((searched.weights > 0).sum())
    return used + sum(len(g.columns) for g in searched.found.rows.groups) - unknowns


def _verdicts(
    searched: Snooped, judged: Assessment, alpha: float
) -> tuple[Verdict, ...]:
    """Each measurement by the same limit that the search for blunders used."""
    limit = removal_limit(len(judged.w), alpha)
    verdicts = np.where(np.abs(judged.w) > limit, Verdict.FAIL, Verdict.PASS)
    verdicts = np.where(judged.controlled, verdicts, Verdict.NOT_TESTED)
    verdicts = np.where(searched.weights > 0, verdicts, Verdict.FAIL)
    for group in searched.ambiguous:
        verdicts[list(group)] = Verdict.AMBIGUOUS
    return tuple(Verdict(v) for v in verdicts)


def _known(
    searched: Snooped,
    names: Sequence[str],
    known_at: Sequence[Ints],
    width: int,
    alpha: float,
    power: float,
) -> tuple[KnownReport, ...]:
    found = searched.found
    count = len(found.unknowns)
    limit = critical_w(alpha / max(sum(len(at) for at in known_at) * width, 1))
    reports = []
    for group, at in zip(found.rows.groups, known_at, strict=True):
        judged = assess_known(group, found.factor, count, alpha, power)
        for k, i in enumerate(at):
            own = slice(k * width, (k + 1) * width)
            w = float(np.abs(judged.w[own]).max())
            seen = float(judged.detectable_m[own].max())
            reports.append(
                _known_report(names[int(i)], judged.difference_m[own], w, seen, limit)
            )
    return _worst_blamed(reports)


def _worst_blamed(reports: list[KnownReport]) -> tuple[KnownReport, ...]:
    """Of known points that do not fit only the worst fails: it may have spoilt the rest."""
    failed = [k for k in reports if k.verdict == Verdict.FAIL]
    worst = max(failed, key=lambda k: k.w, default=None)
    return tuple(
        replace(
            k,
            verdict=Verdict.AMBIGUOUS,
            reason="It does not fit the measurements, nor does another that fits worse.",
        )
        if k in failed and k is not worst
        else k
        for k in reports
    )


def _known_report(
    name: str, difference: Array, w: float, seen: float, limit: float
) -> KnownReport:
    if not math.isfinite(seen) and w <= limit:
        verdict = Verdict.NOT_TESTED
        reason = "No measurement controls it in every direction."
    elif w > limit:
        verdict, reason = Verdict.FAIL, "It does not fit the measurements."
    else:
        verdict, reason = Verdict.PASS, "It fits the measurements."
    return KnownReport(
        name, difference, w, seen if math.isfinite(seen) else None, verdict, reason
    )


def _whole(
    searched: Snooped,
    test: GlobalTest,
    verdicts: tuple[Verdict, ...],
    known: tuple[KnownReport, ...],
) -> tuple[Verdict, str]:
    used = [v for v, w in zip(verdicts, searched.weights, strict=True) if w > 0]
    bad_known = [k.point for k in known if k.verdict == Verdict.FAIL]
    if not test.dof:
        return Verdict.NOT_TESTED, "There is no measurement to spare: nothing checks."
    if searched.control or bad_known:
        worst = f", worst at {bad_known[0]}" if bad_known else ""
        return Verdict.FAIL, f"The measurements do not fit the known values{worst}."
    if searched.ambiguous:
        return (
            Verdict.AMBIGUOUS,
            "Some measurement is wrong, and more than one could be it.",
        )
    if Verdict.FAIL in used:
        return Verdict.FAIL, "Some measurement does not fit the others."
    if test.verdict == Verdict.FAIL:
        return (
            Verdict.UNDECIDED,
            "The residuals are larger than the given precision allows, "
            "and no single measurement stands out.",
        )
    aside = int((searched.weights == 0).sum())
    if aside:
        return Verdict.PASS, f"The measurements agree once {aside} are set aside."
    if test.statistic < test.lower:
        return (
            Verdict.PASS,
            "The measurements agree, better than the given precision lets expect.",
        )
    return Verdict.PASS, "The measurements agree within their given precision."


def _unchecked(
    searched: Snooped,
    judged: Assessment,
    names: Sequence[str],
    columns: Ints,
    solution: Solution,
) -> tuple[str, ...]:
    """Points that an error in some uncontrolled measurement would shift unseen.

    All such measurements are disturbed at once, by amounts without pattern, so that
    one solve tells every point that any of them moves.
    """
    loose = (judged.redundancy < SMALLEST_REDUNDANCY) & (searched.weights > 0)
    place = np.flatnonzero(loose)
    if not len(place):
        return ()
    rows = searched.found.rows
    amount = 1.0 + 0.5 * np.sin(1.0 + 2.399963 * place)
    right = np.zeros(len(searched.found.unknowns))
    used = rows.columns[place] >= 0
    parts = rows.coefficients[place] * amount[:, None]
    np.add.at(right, rows.columns[place][used], parts[used])
    moved = solution.shifts(right)
    size = np.sqrt((moved**2).sum(axis=1))
    spread = np.sqrt(np.maximum(np.einsum("naa->n", judged.covariances), 1e-24))
    return tuple(names[int(i)] for i in np.flatnonzero(size > 0.05 * spread))


def group_precision(
    kinds: Ints, words: Sequence[str], judged: Assessment, in_use: Ints
) -> tuple[GroupPrecision, ...]:
    """Observed over given precision for each kind of measurement present."""
    found = []
    for kind, name in enumerate(words):
        mine = (kinds == kind) & (in_use > 0)
        if not mine.any():
            continue
        redundancy = float(judged.redundancy[mine].sum())
        factor = None
        if redundancy >= FEWEST_FOR_FACTOR:
            factor = math.sqrt(float((judged.residual[mine] ** 2).sum()) / redundancy)
        found.append(GroupPrecision(name, int(mine.sum()), redundancy, factor))
    return tuple(found)


def measurements(
    searched: Snooped,
    done: Outcome,
    observations: Sequence[PlaneObservation | HeightDifference],
    angular: Ints,
    measured: Array,
    sigma: Array,
    sight_m: Array,
) -> Measurements:
    """The measurements with their figures, whitened ones brought back to their unit."""
    judged = done.assessment
    return Measurements(
        observations=tuple(observations),
        angular=angular,
        measured=measured,
        sigma=sigma,
        sight_m=sight_m,
        residual=judged.residual * sigma,
        redundancy=judged.redundancy,
        w=judged.w,
        detectable=judged.detectable * sigma,
        effect_m=judged.effect_m,
        in_use=(searched.weights > 0).astype(np.intp),
        verdicts=done.verdicts,
    )


def shared(
    searched: Snooped, done: Outcome, measured: Measurements, alpha: float, power: float
) -> dict[str, Any]:
    """The fields of `Adjustment` that do not depend on the kind of network."""
    found, dof = searched.found, done.test.dof
    back = sorted(i for i in searched.readmitted if measured.in_use[i])
    return {
        "measurements": measured,
        "known": done.known,
        "test": done.test,
        "dof": dof,
        "squares": found.squares,
        "sigma0": math.sqrt(found.squares / dof) if dof else None,
        "alpha": alpha,
        "power": power,
        "verdict": done.verdict,
        "reason": done.reason,
        "set_aside": tuple(int(i) for i in np.flatnonzero(measured.in_use == 0)),
        "readmitted": tuple(back),
        "ambiguous": tuple(searched.ambiguous),
        "unchecked": done.unchecked,
        "method": found.method,
        "steps": found.steps,
        "solution": done.solution,
    }
