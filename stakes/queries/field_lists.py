"""The marks of a job by what a crew has to do about them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from stakes.queries.drawing import in_order
from stakes.queries.state import JobState, MarkView
from stakes.standing.marks import Standing, Trust

SHOWN = 25
"""Marks of one group shown before it is opened whole."""


@dataclass(frozen=True, slots=True)
class Group:
    """Marks that need the same thing."""

    name: str
    words: str
    views: list[MarkView]
    more: int = 0

    @property
    def count(self) -> int:
        return len(self.views) + self.more


NAMES = (
    ("look", "Look at: disturbed or in question"),
    ("gone", "Gone"),
    ("check", "To check"),
    ("set", "To set"),
    ("held", "Held"),
    ("control", "Control"),
    ("done", "Standing and checked"),
)


def groups(state: JobState, only: str = "", query: str = "") -> list[Group]:
    """Every mark in the first group that fits it; `only` shows one group whole.

    A query searches labels and words, in all groups.
    """
    found: dict[str, list[MarkView]] = {name: [] for name, _ in NAMES}
    for view in in_order(_asked(state.marks.values(), query)):
        name = group_of(view)
        if name:
            found[name].append(view)
    whole = bool(query.strip() or only)
    listed = []
    for name, words in NAMES:
        views = found[name]
        if not views or (only and name != only):
            continue
        shown = views if whole else views[: SHOWN if name != "done" else 0]
        listed.append(Group(name, words, shown[:1000], len(views) - len(shown[:1000])))
    return listed


def group_of(view: MarkView) -> str:
    """What a crew has to do about one mark; empty: nothing any more."""
    if view.standing is Standing.RETIRED:
        return ""
    if view.plan.is_control and view.standing is not Standing.GONE:
        return "control" if view.trust.trust is Trust.CHECKED else "look"
    if view.standing is Standing.GONE:
        return "gone"
    doubtful = view.trust.trust in (Trust.IN_QUESTION, Trust.FAILED)
    if view.standing is Standing.DISTURBED or (
        doubtful and view.standing is Standing.STANDING
    ):
        return "look"
    if view.plan.purpose == "foreign":
        return "done"
    if view.standing is Standing.PLANNED or view.trust.trust is Trust.SUPERSEDED:
        return "set"
    if view.stake is not None and view.stake.held:
        return "held"
    return "check" if view.trust.trust is Trust.NOT_CHECKED else "done"


def _asked(views: Iterable[MarkView], query: str) -> list[MarkView]:
    wanted = query.strip().casefold()
    if not wanted:
        return list(views)
    return [
        v
        for v in views
        if wanted in v.label.casefold()
        or wanted in v.plan.line.casefold()
        or wanted in v.plan.sort.casefold()
    ]
