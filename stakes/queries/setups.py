"""Setups as pages ask for them: which are open, what one leans on and has set."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

import numpy as np
from django.utils import timezone

from stakes.kinds.setting import StakeSet
from stakes.kinds.setups import (
    SetupCheck,
    SetupClosed,
    SetupOpened,
    SetupRechecked,
    UsedMark,
)
from stakes.models import Entry, Mark, Record, Setup
from stakes.queries.gates import Leaned
from stakes.queries.setup_checks import Stand
from stakes.queries.state import JobState, MarkView
from stakes.queries.tolerance import classes_of, control_class
from stakes.record import Counted, Refused, reading

RECHECK_EVERY = timedelta(hours=1)

STILL_NAMED = timedelta(days=7)
"""How long a closed setup is offered, for stakes that are recorded late."""

ROLES: dict[str, tuple[tuple[str, int], ...]] = {
    "total station on a mark": (("occupied", 1), ("oriented on", 1)),
    "free station": (("oriented on", 2),),
    "satellite": (("known", 1),),
    "level run": (("benchmark", 1),),
    "laser": (("benchmark", 1),),
    "tape": (("held", 1),),
    "string": (("held", 2),),
}
"""The roles in which each sort of setup leans on marks, and how many it needs."""

COMPONENTS = {"level run": "e", "laser": "e", "satellite": "p"}
"""What of a mark a setup leans on; position unless said otherwise."""

GIVES_HEIGHT = frozenset({"occupied", "benchmark", "known"})


@dataclass(frozen=True, slots=True)
class OpenSetup:
    """A setup to work from and how long ago it was last found right."""

    row: Setup
    checked_at: datetime
    minutes: int
    due: bool
    doubt: str

    @property
    def ever_passed(self) -> bool:
        return self.row.passed_at is not None

    @property
    def ago(self) -> str:
        return ago(self.minutes)


@dataclass(frozen=True, slots=True)
class SetFrom:
    """One stake set from a setup: its mark, when, and whether it still is the one."""

    view: MarkView
    entry: Counted
    is_current: bool


@dataclass(frozen=True, slots=True)
class SetupStory:
    """A setup with its own entries and everything set from it."""

    row: Setup
    opened: SetupOpened
    entries: Sequence[Counted]
    stakes: Sequence[SetFrom]
    doubt: str
    minutes_open: int

    @property
    def open_for(self) -> str:
        return ago(self.minutes_open)

    @property
    def checks(self) -> list[tuple[Counted, SetupCheck]]:
        return [
            (counted, check)
            for counted in self.entries
            for check in getattr(counted.fact, "checks", ())
        ]


def ago(minutes: int) -> str:
    """A stretch of time as people say it.

    >>> ago(35), ago(200), ago(3000)
    ('35 min', '3 h 20 min', '2 days')
    """
    if minutes < 100:
        return f"{minutes} min"
    if minutes < 48 * 60:
        return f"{minutes // 60} h {minutes % 60} min"
    return f"{minutes // (24 * 60)} days"


def open_setups(state: JobState, now: datetime | None = None) -> list[OpenSetup]:
    """Setups that are not closed, the last one first."""
    now = now or timezone.now()
    rows = [s for s in state.setups.values() if s.closed_at is None and s.opened_at]
    rows.sort(key=lambda row: row.opened_at, reverse=True)
    return [_open(state, row, now) for row in rows]


def usable_setups(state: JobState, now: datetime | None = None) -> list[OpenSetup]:
    """Open setups, then those closed in the last days: paper is keyed in afterwards."""
    now = now or timezone.now()
    closed = [
        s
        for s in state.setups.values()
        if s.closed_at is not None and now - s.closed_at < STILL_NAMED and s.opened_at
    ]
    closed.sort(key=lambda row: row.closed_at or now, reverse=True)
    return [*open_setups(state, now), *(_open(state, row, now) for row in closed[:5])]


def _open(state: JobState, row: Setup, now: datetime) -> OpenSetup:
    at = row.passed_at or row.opened_at or now
    since = now - at
    return OpenSetup(
        row=row,
        checked_at=at,
        minutes=max(0, int(since.total_seconds() // 60)),
        due=row.passed_at is None or since > RECHECK_EVERY,
        doubt=doubt_of(state, row.key),
    )


def doubt_of(
    state: JobState, setup: UUID, components: str = "pe", at: datetime | None = None
) -> str:
    """Why what a setup sets is in question, from a moment on; empty: it is not."""
    for component in components:
        doubt = state.judge.setup_doubt(setup, component)
        if doubt is not None and (at is None or at >= doubt[0]):
            names = [state.marks[m].label for m in doubt[2] if m in state.marks]
            return f"{doubt[1]} ({', '.join(names)})" if names else doubt[1]
    return ""


def setup_called(record: Record, key: UUID) -> Setup:
    """The setup of this record with this key; Refused when there is none."""
    row = Setup.objects.filter(record=record, key=key).first()
    if row is None:
        raise Refused(
            "There is no such setup on this job.",
            do="Choose one of the open setups, or open one.",
            field="setup",
            code="no setup",
        )
    return row


def own_entries(record: Record, key: UUID) -> list[Counted]:
    """How a setup was opened, re-checked and closed, in order."""
    kinds = [SetupOpened.KIND, SetupRechecked.KIND, SetupClosed.KIND]
    return reading.entries(record, thing="setup", key=key, kinds=kinds)


def opening_of(record: Record, key: UUID) -> SetupOpened:
    """How a setup was opened."""
    for counted in own_entries(record, key):
        if isinstance(counted.fact, SetupOpened):
            return counted.fact
    raise Refused("There is no such setup on this job.", field="setup")


def set_fact(state: JobState, view: MarkView) -> StakeSet | None:
    """What was said when the current stake of a mark was set."""
    number = view.stake.set_number if view.stake else None
    if number is None:
        return None
    entry = Entry.objects.filter(record=state.record, number=number).first()
    fact = reading.decoded(entry, {}).fact if entry else None
    return fact if isinstance(fact, StakeSet) else None


def story(state: JobState, key: UUID) -> SetupStory:
    """A setup with its checks and the stakes set from it."""
    record = state.record
    row = setup_called(record, key)
    entries = own_entries(record, key)
    until = row.closed_at or timezone.now()
    opened = next(c.fact for c in entries if isinstance(c.fact, SetupOpened))
    return SetupStory(
        row=row,
        opened=opened,
        entries=entries,
        stakes=_set_from(state, key),
        doubt=doubt_of(state, key),
        minutes_open=int((until - (row.opened_at or until)).total_seconds() // 60),
    )


def _set_from(state: JobState, key: UUID) -> list[SetFrom]:
    said = reading.entries(state.record, thing="setup", key=key, kinds=[StakeSet.KIND])
    found = []
    for counted in said:
        fact = counted.fact
        assert isinstance(fact, StakeSet)
        view = state.marks.get(fact.mark)
        if view is not None:
            stake = view.stake
            current = stake is not None and stake.set_number == counted.number
            found.append(SetFrom(view, counted, current))
    return found


def leaned(state: JobState, sort: str, used: Sequence[UsedMark]) -> list[Leaned]:
    """The marks a setup leans on, as its gates look at them."""
    components = COMPONENTS.get(sort, "p")
    return [Leaned(state.marks[u.mark], u.role, components) for u in used]


def stand(
    state: JobState,
    sort: str,
    used: Sequence[UsedMark],
    station: tuple[float, float] | None = None,
    also: Sequence[UUID] = (),
    at: datetime | None = None,
) -> Stand:
    """A setup as its checks see it; `also` are the marks checked."""
    wanted = {u.mark for u in used} | set(also)
    unknown = wanted - state.marks.keys()
    if unknown:
        raise Refused(
            "A mark named here is not on this job.",
            do="Choose the mark from the list.",
            field="mark",
            code="no mark",
        )
    marks: dict[UUID, Mark] = {key: state.marks[key].plan for key in wanted}
    return Stand(
        sort=sort,
        used=used,
        marks=marks,
        unit=state.record.length_unit,
        limits=control_class(classes_of(state.record, at)),
        station=None if station is None else np.array(station),
    )


def stand_of(
    state: JobState, opened: SetupOpened, also: Sequence[UUID], at: datetime | None
) -> Stand:
    """An open setup as its later checks see it."""
    station = None
    if opened.northing is not None and opened.easting is not None:
        station = (opened.easting.metres, opened.northing.metres)
    return stand(state, opened.sort, opened.used, station, also, at)


def height_marks(state: JobState, key: UUID) -> list[MarkView]:
    """Marks with an elevation that a setup took its height from or passed a check on."""
    found: dict[UUID, MarkView] = {}
    for counted in own_entries(state.record, key):
        fact = counted.fact
        used = fact.used if isinstance(fact, SetupOpened) else ()
        named = [u.mark for u in used if u.role in GIVES_HEIGHT]
        named += [
            c.mark
            for c in getattr(fact, "checks", ())
            if c.quantity == "elevation" and c.verdict == "pass"
        ]
        for mark in named:
            view = state.marks.get(mark)
            if view is not None and view.plan.elevation_nm:
                found[mark] = view
    return list(found.values())
