"""What handover should wait for: nothing in question, nothing held, what was asked of
the class. A sentence for each matter, with its marks."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from uuid import UUID

from jobs.queries.terms import terms_at, today
from stakes.models import Check, Record
from stakes.queries.state import MarkView, job_state
from stakes.standing.marks import Standing, Trust


def lacking(record: Record, listed: Sequence[UUID]) -> list[str]:
    """What these stakes still need, in sentences without an end stop."""
    state = job_state(record)
    views = [state.marks[mark] for mark in listed if mark in state.marks]
    matters: dict[str, list[str]] = defaultdict(list)
    for view in views:
        for matter in _matters(view):
            matters[matter].append(view.label)
    found = [f"{_named(labels)} {matter}" for matter, labels in matters.items()]
    return found + _reaches_lacking(record, views)


def _matters(view: MarkView) -> list[str]:
    found = []
    if view.standing is not Standing.STANDING:
        found.append(f"recorded as {view.standing}, not standing")
    if view.trust.trust in (Trust.IN_QUESTION, Trust.FAILED, Trust.SUPERSEDED):
        found.append(str(view.trust.trust))
    if view.trust.trust is Trust.NOT_CHECKED:
        found.append("not checked by anything independent of the setting")
    if view.held_back:
        found.append("on hold")
    if view.stake and view.stake.provisional:
        found.append("provisional until tied to control")
    return found


def _reaches_lacking(record: Record, views: Iterable[MarkView]) -> list[str]:
    """Shape, place and fit are asked of a set of stakes, as their class says."""
    terms = terms_at(record, today(record))
    by_class: dict[str, list[MarkView]] = defaultdict(list)
    for view in views:
        by_class[view.plan.tolerance].append(view)
    found = []
    for name, members in by_class.items():
        wanted = terms.tolerance_class(name)
        if wanted is None or not wanted.reaches:
            continue
        seen = _reaches_seen(record, members)
        missing = [str(r) for r in wanted.reaches if str(r) not in seen]
        if missing:
            found.append(
                f"class {name} asks for a passed check of {' and of '.join(missing)}"
            )
    return found


def _reaches_seen(record: Record, views: Sequence[MarkView]) -> set[str]:
    keys = {str(view.key) for view in views}
    checks = Check.objects.filter(record=record, verdict="pass", grade__gte=1)
    return {r for c in checks if keys & set(c.listed) for r in c.reaches}


def _named(labels: Sequence[str]) -> str:
    if len(labels) > 6:
        return f"{', '.join(labels[:5])} and {len(labels) - 5} more are"
    return f"{', '.join(labels)} {'is' if len(labels) == 1 else 'are'}"
