"""With what a stake was set and a check was made, and what the two do not share."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from uuid import UUID

from geometry.decide import (
    Against,
    Component,
    Independence,
    Means,
    Reach,
    independence,
    reach,
)
from stakes.models import Entry
from stakes.queries.measuring import METHODS
from stakes.queries.state import JobState, MarkView


@dataclass(frozen=True, slots=True)
class Worth:
    """What a check is worth for every mark it judges: the least of each."""

    grade: int
    reason: str
    shared: tuple[str, ...]
    reaches: tuple[Reach, ...]
    reach_reason: str


def setting_means(state: JobState, views: Sequence[MarkView]) -> dict[UUID, Means]:
    """With what each mark came to stand, as far as the record says.

    A control mark was not set but given a value; that is a means of its own.
    """
    numbers = [v.stake.set_number for v in views if v.stake and v.stake.set_number]
    rows = Entry.objects.filter(record=state.record, number__in=numbers)
    people = dict(rows.values_list("number", "person"))
    return {view.key: _setting(state, view, people) for view in views}


def _setting(state: JobState, view: MarkView, people: dict[int, str]) -> Means:
    stake = view.stake
    if stake is None or stake.set_number is None:
        value = view.plan.value
        return Means(f"value {value}", (), "adopted value") if value else Means()
    setup = state.setups.get(stake.setup) if stake.setup else None
    return Means(
        setup=str(stake.setup) if stake.setup else f"set {stake.set_number}",
        control=frozenset(setup.bears_on) if setup else frozenset(),
        method=METHODS.get(setup.sort) if setup else None,
        instrument=(setup.serial or None) if setup else None,
        person=people.get(stake.set_number),
    )


def check_means(
    state: JobState,
    *,
    check: UUID,
    setup: UUID | None,
    control: Iterable[UUID],
    method: str,
    instrument: str,
    person: str,
) -> Means:
    """With what a check was made. Without a setup it is a means of its own."""
    row = state.setups.get(setup) if setup else None
    leans = frozenset(row.bears_on) if row else frozenset()
    return Means(
        setup=str(setup) if setup else f"check {check}",
        control=leans | {str(mark) for mark in control},
        method=(METHODS.get(row.sort) if row else method) or None,
        instrument=instrument or ((row.serial or None) if row else None),
        person=person,
    )


def worth(
    state: JobState,
    judged: Sequence[MarkView],
    others: Sequence[MarkView],
    check: Means,
    component: str,
    against: Iterable[Against] = (),
) -> Worth:
    """The least independence and the reach common to all marks judged."""
    settings = setting_means(state, judged)
    graded = [_grade(view, settings[view.key], check) for view in judged]
    weakest = min(graded, key=lambda one: one.grade)
    found: set[Reach] | None = None
    reason = ""
    for view in judged:
        seen = reach(
            Component.ELEVATION if component == "e" else Component.POSITION,
            [*against, *_against(view, judged, others, component)],
            check_control=set(check.control),
            setting_control=set(settings[view.key].control),
        )
        if found is None or seen.reaches < found:
            reason = seen.reason
        found = set(seen.reaches) if found is None else found & seen.reaches
    return Worth(
        grade=weakest.grade,
        reason=weakest.reason,
        shared=weakest.shared,
        reaches=tuple(sorted(found or (), key=str)),
        reach_reason=reason,
    )


def _grade(view: MarkView, setting: Means, check: Means) -> Independence:
    """A mark a setup leans on is not checked by that setup, whatever else differs."""
    if str(view.key) in check.control and view.plan.is_control:
        return independence(check, check)
    return independence(setting, check)


def _against(
    view: MarkView,
    judged: Sequence[MarkView],
    others: Sequence[MarkView],
    component: str,
) -> list[Against]:
    """The other marks of the check, as what they are to this one."""
    found = []
    for other in (*judged, *others):
        if other.key == view.key:
            continue
        if other.plan.is_control:
            found.append(Against.BENCHMARK if component == "e" else Against.CONTROL)
        else:
            found.append(Against.STAKE)
    return found
