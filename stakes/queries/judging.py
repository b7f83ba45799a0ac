"""Numbers held against a tolerance class, as a judgement the record can keep."""

from __future__ import annotations

from geometry.checked import Array
from geometry.decide import (
    Decision,
    Rule,
    decide,
    decide_radial,
    repeats,
    worst_uncertainty,
)
from geometry.units import Length, Unit
from geometry.verdicts import Verdict
from stakes.kinds.checking import Judgement
from stakes.queries.tolerance import ToleranceClass
from stakes.record.lengths import Measured

METHOD = "1"
"""Version of the rules by which checks are judged; a change is a *judged again*."""


def as_measured(metres: float, unit: Unit) -> Measured:
    """A computed length in the unit of the job, to a hundredth of a millimetre."""
    return Measured.of(Length.from_metres(metres, unit, 4 if unit.is_foot else 5))


def judge(
    difference_m: float,
    limits: ToleranceClass,
    component: str,
    uncertainty_m: float,
    unit: Unit,
    *,
    measured: Measured | None = None,
    computed: Measured | None = None,
) -> Judgement:
    """One number against its tolerance: a distance, an offset, an elevation."""
    tolerance = limits.limit(component)
    if tolerance is None:
        return _not_tested(limits, component, difference_m, unit, measured, computed)
    decision = decide(
        difference_m, tolerance.metres, uncertainty_m, rule=Rule(limits.rule)
    )
    return _judgement(decision, limits, tolerance, unit, measured, computed)


def judge_place(
    gap_m: Array, limits: ToleranceClass, covariance_m2: Array, unit: Unit
) -> Judgement:
    """A measured place against where it should be; `gap_m` is (dE, dN)."""
    tolerance = limits.limit("p")
    size = float((gap_m @ gap_m) ** 0.5)
    if tolerance is None:
        return _not_tested(limits, "p", size, unit, None, None)
    decision = decide_radial(
        gap_m,
        tolerance.metres,
        worst_uncertainty(covariance_m2),
        rule=Rule(limits.rule),
    )
    return _judgement(decision, limits, tolerance, unit, None, None)


def _judgement(
    decision: Decision,
    limits: ToleranceClass,
    tolerance: Measured,
    unit: Unit,
    measured: Measured | None,
    computed: Measured | None,
) -> Judgement:
    return Judgement(
        measured=measured,
        computed=computed,
        difference=as_measured(decision.difference, unit),
        tolerance=tolerance,
        uncertainty=as_measured(decision.uncertainty or 0.0, unit),
        tolerance_class=limits.name,
        rule=str(decision.rule),
        method=METHOD,
        verdict=str(decision.verdict),  # type: ignore[arg-type]
        reason=_reason(decision),
    )


def _reason(decision: Decision) -> str:
    """The decision's own sentence, what weakens it, and what would settle it."""
    said = [str(decision.reason)]
    if not decision.well_measured:
        said.append("Its uncertainty is more than a third of the tolerance.")
    if decision.verdict is Verdict.UNDECIDED:
        said.append(_settles(decision))
    return " ".join(said)


def _settles(decision: Decision) -> str:
    more = repeats(decision.difference, decision.tolerance, decision.uncertainty or 0.0)
    if more.total is None:
        return "Repeats will not settle it: measure it with a better instrument."
    return f"The mean of {more.total} measurements would settle it."


def _not_tested(
    limits: ToleranceClass,
    component: str,
    difference_m: float,
    unit: Unit,
    measured: Measured | None,
    computed: Measured | None,
) -> Judgement:
    word = "position" if component == "p" else "elevation"
    return Judgement(
        measured=measured,
        computed=computed,
        difference=as_measured(difference_m, unit),
        tolerance_class=limits.name,
        method=METHOD,
        verdict="not tested",
        reason=f"{limits.name} sets no tolerance of {word}.",
    )
