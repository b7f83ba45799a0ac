"""Ways back for one lost mark, from what the job knows of the marks that survive."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from uuid import UUID

import numpy as np
from django.utils import timezone

from geometry.checked import Array
from geometry.precision import obstacle
from geometry.units import Length, angle_text
from geometry.ways import Check, Number, Sort, Survivor, Target, Way, ways_back
from stakes.models import Mark, Record, Zone
from stakes.queries import expected, held_by, measuring
from stakes.queries.state import JobState, MarkView
from stakes.queries.tolerance import ToleranceClass, class_of, classes_of
from stakes.record import Refused
from stakes.standing.marks import Standing, Trust

OTHERWISE = "done otherwise"

_DOUBTFUL = (Trust.IN_QUESTION, Trust.FAILED, Trust.SUPERSEDED)


@dataclass(frozen=True, slots=True)
class WaysBack:
    """Every way for one mark, with what a page needs to name marks and judge checks."""

    view: MarkView
    limits: ToleranceClass
    ways: tuple[Way, ...]
    labels: Mapping[str, str]
    basis: tuple[str, ...]
    unit_digits: int

    def way(self, rank: int) -> Way:
        """The offered way of that rank; Refused when there is none."""
        for way in self.ways:
            if way.rank == rank and way.offered:
                return way
        raise Refused(
            "This way is not offered any more: something has changed meanwhile.",
            do="Choose again from the ways as they are now.",
            code="no way",
        )


def ways_for(state: JobState, mark: UUID) -> WaysBack:
    """All ways back for a mark, ranked, refused ones last with their reason.

    Raises Refused for control and benchmarks (they get new values, never old places)
    and for a mark without a planned position.
    """
    view = state.marks[mark]
    refuse_control(view)
    limits = class_of(view.plan, classes_of(state.record, state.at))
    record = state.record
    return WaysBack(
        view=view,
        limits=limits,
        ways=ways_back(
            _target(view, limits),
            survivors(state, mark),
            obstacles=_obstacles(record),
        ),
        labels={str(v.key): v.label for v in state.marks.values()},
        basis=tuple(basis_doubts(record, view)),
        unit_digits=3 if record.length_unit == "m" else 2,
    )


def refuse_control(view: MarkView) -> None:
    """Control, benchmarks, legal monuments and foreign marks are not put back here."""
    if view.plan.is_control:
        raise Refused(
            f"{view.label} is {view.plan.purpose}: it is never set back to old values.",
            do="Re-establish it with new values on the control page.",
            code="control",
        )
    if view.plan.purpose == "foreign":
        raise Refused(
            f"{view.label} was set by others.",
            do="Only who set it may put it back; the surveyor may adopt a value.",
            code="foreign",
        )
    if "monument" in view.plan.sort.casefold():
        raise Refused(
            f"{view.label} is a legal monument.",
            do="Leave it alone and call the licensed surveyor: the law says who may act.",
            code="monument",
        )
    if view.plan.easting_m is None or view.plan.northing_m is None:
        raise Refused(
            f"{view.label} has no planned position.",
            do="The office has to issue it first.",
            code="no position",
        )


def basis_doubts(record: Record, view: MarkView) -> list[str]:
    """Why the design itself may not be worked from now, in sentences."""
    now = timezone.now()
    found = [
        f"a question holds it: {q.words}"
        for q in held_by.questions(record, view.key, now)
    ]
    found += [
        f"a verbal direction holds it: {d.words}"
        for d in held_by.directions(record, view.key, now)
    ]
    found += [
        f"sheet {s.sheet_number} revision {s.revision} is newer than its basis"
        for s in held_by.newer_sheets(record, view.plan, now)
    ]
    return found


def _target(view: MarkView, limits: ToleranceClass) -> Target:
    plan = view.plan
    tolerance = limits.position.metres if limits.position else 0.02
    height = limits.elevation.metres if limits.elevation else 0.01
    carries_height = plan.carries != "position"
    return Target(
        id=str(view.key),
        position=(float(plan.easting_m or 0), float(plan.northing_m or 0)),
        tolerance_m=tolerance,
        elevation_m=plan.elevation_m if carries_height else None,
        elevation_tolerance_m=height,
    )


def survivors(state: JobState, target: UUID) -> list[Survivor]:
    """Every mark that is or was on the ground, with why it may not serve."""
    found = []
    for view in state.marks.values():
        if view.key == target or view.stake is None or view.plan.easting_m is None:
            continue
        if view.standing is Standing.RETIRED and view.plan.purpose == "stake":
            continue
        found.append(_survivor(view))
    return found


def _survivor(view: MarkView) -> Survivor:
    plan = view.plan
    why = why_not(view, view.position.trust)
    height_why = why_not(view, view.elevation.trust)
    return Survivor(
        id=str(view.key),
        position=(float(plan.easting_m or 0), float(plan.northing_m or 0)),
        covariance_m2=_covariance(plan),
        sort=Sort.CONTROL
        if plan.purpose == "control"
        else Sort.BENCHMARK
        if plan.purpose == "benchmark"
        else Sort.STAKE,
        usable=not why and plan.carries != "elevation",
        why_not=why
        or ("it carries only an elevation" if plan.carries == "elevation" else ""),
        trusted=view.position.trust is Trust.CHECKED,
        elevation_m=plan.elevation_m if plan.carries != "position" else None,
        elevation_usable=not height_why,
        elevation_trusted=view.elevation.trust is Trust.CHECKED,
    )


def why_not(view: MarkView, trust: Trust) -> str:
    """Why a mark may be no basis; empty when it may."""
    if view.plan.purpose == "foreign":
        return "it was set by others"
    if view.standing is Standing.GONE:
        return "it is gone"
    if view.standing is Standing.DISTURBED:
        return "it is disturbed"
    if trust in _DOUBTFUL:
        return f"it is {trust}"
    if view.held_back:
        return "it is on hold"
    return ""


def _covariance(plan: Mark) -> Array:
    known = expected.covariance(plan)
    if np.trace(known) > 0:
        return known
    if plan.is_control:
        return np.eye(2) * 0.003**2
    return measuring.place_covariance("total station", plan)


def _obstacles(record: Record) -> list[object]:
    zones = Zone.objects.filter(record=record, sort__icontains="obstacle")
    return [
        obstacle(zone.corners_m, zone.height_m if zone.height_m else float("inf"))
        for zone in zones
        if zone.closed
    ]


def number_words(found: WaysBack, number: Number) -> str:
    """One number to set or pull, in the job's unit, with the marks it is between."""
    unit = found.view.plan.record.length_unit
    value = (
        angle_text(number.value)
        if number.unit == "rad"
        else _length(number.value, unit, found.unit_digits)
    )
    at = found.labels.get(number.at, number.at)
    to = found.labels.get(number.to, number.to)
    between = (
        f" from {at} to {to}" if at and to else f" at {at or to}" if at or to else ""
    )
    note = f" ({number.note})" if number.note else ""
    return f"{number.name}{between}: {value}{note}"


def check_words(found: WaysBack, check: Check) -> str:
    """A check as it is to be made, without what it should give."""
    at = found.labels.get(check.at, check.at)
    to = found.labels.get(check.to, check.to)
    return (
        f"{check.name} from {at} to {to}" if at and to else f"{check.name} {at or to}"
    )


def expected_words(found: WaysBack, check: Check) -> str:
    unit = found.view.plan.record.length_unit
    if check.unit == "rad":
        return angle_text(check.expected)
    return _length(check.expected, unit, found.unit_digits)


def own_check(way: Way) -> Check:
    """The check a way is proved by: a length or height where it has one."""
    if not way.checks:
        raise Refused("This way has no check of its own.", field="measured")
    return next((c for c in way.checks if c.unit == "m"), way.checks[0])


def in_metres(found: WaysBack, check: Check, value: float) -> float:
    """A difference of a check as metres at the mark; an angle by its lever."""
    if check.unit != "rad":
        return value
    tolerance = found.limits.position.metres if found.limits.position else 0.02
    return value * tolerance / check.tolerance


def size_words(found: WaysBack, metres: float) -> str:
    unit = found.view.plan.record.length_unit
    return _length(metres, unit, found.unit_digits + 1)


def _length(metres: float, unit: object, digits: int) -> str:
    if not math.isfinite(metres):
        return "without limit"  # a refused way has no precision to show
    length = Length.from_metres(metres, unit, digits)  # type: ignore[arg-type]
    return f"{length.text} {length.unit}"


def fits_words(way: Way) -> str:
    """How a way compares with the tolerance, in three words."""
    if way.ratio > 1:
        return "larger than the tolerance"
    return "fits" if not way.cautions else "fits, weaker"
