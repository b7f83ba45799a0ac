"""What a stake rests on, and what rests on it: through setups and their marks."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from stakes.models import Setup
from stakes.queries.state import JobState, MarkView


@dataclass(frozen=True, slots=True)
class Rest:
    """One step of provenance: a setup, its marks, and how deep below the mark."""

    depth: int
    setup: Setup
    marks: tuple[MarkView, ...]
    doubt: str


def rests_on(state: JobState, mark: UUID) -> list[Rest]:
    """The setups a mark's current stake came from, down to where values were adopted."""
    found: list[Rest] = []
    seen: set[UUID] = set()
    wanted = [(0, mark)]
    while wanted:
        depth, key = wanted.pop(0)
        view = state.marks.get(key)
        setup = view.stake.setup if view and view.stake else None
        if setup is None or setup in seen or setup not in state.setups:
            continue
        seen.add(setup)
        row = state.setups[setup]
        bears = [UUID(m) for m in row.bears_on]
        found.append(
            Rest(
                depth=depth,
                setup=row,
                marks=tuple(state.marks[m] for m in bears if m in state.marks),
                doubt=_doubt(state, setup),
            )
        )
        wanted += [(depth + 1, m) for m in bears]
    return found


def rests_on_it(state: JobState, mark: UUID) -> list[MarkView]:
    """Every mark whose current stake leans, directly or through others, on this one."""
    leaning: set[UUID] = set()
    bearing = {mark}
    while bearing:
        setups = {
            key
            for key, setup in state.setups.items()
            if any(UUID(m) in bearing for m in setup.bears_on)
        }
        bearing = {
            view.key
            for view in state.marks.values()
            if view.stake and view.stake.setup in setups and view.key not in leaning
        } - {mark}
        leaning |= bearing
    return [view for view in state.marks.values() if view.key in leaning]


def _doubt(state: JobState, setup: UUID) -> str:
    for component in "pe":
        doubt = state.judge.setup_doubt(setup, component)
        if doubt is not None:
            return doubt[1]
    return ""


def used_between(
    state: JobState, mark: UUID, since: datetime, until: datetime | None = None
) -> list[Setup]:
    """Setups that leaned on a mark in a stretch of time."""
    return [
        setup
        for setup in state.setups.values()
        if str(mark) in setup.bears_on
        and setup.opened_at
        and setup.opened_at >= since
        and (until is None or setup.opened_at < until)
    ]
