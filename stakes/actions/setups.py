"""Open, re-check and close a setup."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

from stakes.actions.once import Act, follows, once
from stakes.actions.passing import NO_PASSAGE, Passage, passed
from stakes.actions.told import kept_apart, short
from stakes.kinds.setups import (
    SetupCheck,
    SetupClosed,
    SetupOpened,
    SetupRechecked,
    UsedMark,
)
from stakes.models import Entry, Record
from stakes.queries import gates, setup_checks, setups
from stakes.queries.judging import as_measured
from stakes.queries.setup_checks import CheckMade, Sight
from stakes.queries.state import JobState
from stakes.queries.state_then import state_then
from stakes.record import By, Known, Refused, Said, append
from stakes.record.lengths import Measured


@dataclass(frozen=True, slots=True)
class Use:
    """A mark a setup leans on, and in which role."""

    mark: uuid.UUID
    role: str


def open_setup(
    *,
    record: Record,
    sort: str,
    used: Sequence[Use],
    by: By,
    checks: Sequence[CheckMade] = (),
    sights: Sequence[Sight] = (),
    station: tuple[Measured, Measured] | None = None,
    instrument: str = "",
    serial: str = "",
    calibrated_on: str = "",
    instrument_height: Measured | None = None,
    target_height: Measured | None = None,
    prism_constant: Measured | None = None,
    fix: str = "",
    residuals: Sequence[str] = (),
    weather: str = "",
    remark: str = "",
    closed_run: bool = False,
    passage: Passage = NO_PASSAGE,
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Open a setup from named marks, with its opening checks; returns its key.

    `station` (northing, easting) is where a free station says it stands, when its
    `sights` are not given. `closed_run` says that a level run will be closed on its own
    benchmark. Raises Gated when something should hold first and does not, Refused for
    what a person must mend.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        wanted = [u.mark for u in used] + [c.mark for c in checks]
        state = state_then(record, at, [*wanted, *(s.mark for s in sights)])
        named = _used(state, sort, used, sights)
        where = None if station is None else (station[1].metres, station[0].metres)
        stand = setups.stand(state, sort, named, where, [c.mark for c in checks], at)
        left_over, misfit = list(residuals), ""
        if sights:
            found = setup_checks.fix_of(stand, sights)
            where = (float(found.station[0]), float(found.station[1]))
            stand = setups.stand(
                state, sort, named, where, [c.mark for c in checks], at
            )
            left_over += setup_checks.residual_words(stand, sights, found)
            misfit = setup_checks.misfit_of(stand, found)
        made = setup_checks.checks_of(stand, checks)
        stopped = gates.for_opening(
            sort,
            setups.leaned(state, sort, named),
            made,
            misfit=misfit,
            closed_run=closed_run and sort == "level run",
        )
        past, authorised = passed(stopped, passage)
        unit = record.length_unit
        fact = SetupOpened(
            setup=follows(key, "setup"),
            sort=sort,  # type: ignore[arg-type]
            used=named,
            instrument=short(instrument, "instrument"),
            serial=short(serial, "serial"),
            calibrated_on=short(calibrated_on, "calibrated_on"),
            instrument_height=instrument_height,
            target_height=target_height,
            prism_constant=prism_constant,
            checks=made,
            residuals=tuple(short(r, "residuals", 200) for r in left_over),
            fix=short(fix, "fix"),
            northing=as_measured(where[1], unit) if where else None,
            easting=as_measured(where[0], unit) if where else None,
            weather=short(weather, "weather", 200),
            gates=past,
            authorised_by=authorised,
            occasion=occasion,
        )
        return _append(record, fact, by, at, key, act, remark)

    done = once(record, key, asked, do)
    return follows(done[0].key, "setup")


def recheck_setup(
    *,
    record: Record,
    setup: uuid.UUID,
    checks: Sequence[CheckMade],
    by: By,
    remark: str = "",
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Check an open setup again: each hour, after a bump, before moving."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        if not checks:
            raise Refused(
                "A re-check needs something measured.",
                do="Measure to a mark and type what was measured.",
                field="mark",
            )
        made = _later_checks(record, setup, checks, at)
        fact = SetupRechecked(setup=setup, checks=made, occasion=occasion)
        return _append(record, fact, by, at, key, act, remark)

    return once(record, key, asked, do)[0]


def close_setup(
    *,
    record: Record,
    setup: uuid.UUID,
    by: By,
    checks: Sequence[CheckMade] = (),
    remark: str = "",
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Close a setup, with its closing check; without one its last stakes stay unproved."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        made = _later_checks(record, setup, checks, at, closing=True)
        fact = SetupClosed(setup=setup, checks=made, occasion=occasion)
        return _append(record, fact, by, at, key, act, remark)

    return once(record, key, asked, do)[0]


def _append(
    record: Record,
    fact: SetupOpened | SetupRechecked | SetupClosed,
    by: By,
    at: datetime | None,
    key: uuid.UUID,
    act: Act,
    remark: str,
) -> list[Entry]:
    said = Said(
        fact=fact, at=at, known=Known.MEASURED, key=key, private=kept_apart(remark)
    )
    return append(record, said, by=by, act=act)


def _used(
    state: JobState, sort: str, used: Sequence[Use], sights: Sequence[Sight]
) -> tuple[UsedMark, ...]:
    """The marks leaned on, each once, with the value the record holds for it now."""
    if sort not in setups.ROLES:
        raise Refused(f"{sort!r} is no sort of setup.", field="sort")
    listed = list(used)
    known = {u.mark for u in listed}
    listed += [Use(s.mark, "oriented on") for s in sights if s.mark not in known]
    _refuse_roles(sort, listed)
    twice = len({u.mark for u in listed}) < len(listed)
    if twice:
        raise Refused(
            "One mark is named twice.",
            do="Name another mark in one of the two places.",
            field=_FIELD.get(listed[-1].role, ""),
        )
    for use in listed:
        if use.mark not in state.marks:
            raise Refused(
                "A mark named here is not on this job.",
                do="Choose the mark from the list.",
                field=_FIELD.get(use.role, ""),
                code="no mark",
            )
    return tuple(
        UsedMark(
            mark=use.mark,
            role=use.role,  # type: ignore[arg-type]
            value=state.marks[use.mark].plan.value,
        )
        for use in listed
    )


def _refuse_roles(sort: str, listed: Sequence[Use]) -> None:
    for role, least in setups.ROLES[sort]:
        count = sum(use.role == role for use in listed)
        if count < least:
            marks = "one mark" if least == 1 else f"{least} marks"
            raise Refused(
                f"A {sort} needs {marks} {_ROLE_WORDS[role]}.",
                do="Choose from the list.",
                field=_FIELD[role],
            )


_ROLE_WORDS = {
    "occupied": "to stand on",
    "oriented on": "to be oriented on",
    "known": "it was fitted to",
    "benchmark": "as benchmark",
    "held": "to be held on",
}
_FIELD = {
    "occupied": "occupied",
    "oriented on": "oriented_on",
    "known": "known",
    "benchmark": "benchmark",
    "held": "held",
}


def _later_checks(
    record: Record,
    setup: uuid.UUID,
    checks: Sequence[CheckMade],
    at: datetime | None,
    *,
    closing: bool = False,
) -> tuple[SetupCheck, ...]:
    """The checks of a setup that was opened before; Refused after it was closed."""
    row = setups.setup_called(record, setup)
    if row.closed_at is not None and (at is None or at > row.closed_at):
        raise Refused(
            "This setup is closed.",
            do="Open a new one. A check made before it was closed needs its own time.",
            field="at",
            code="closed",
        )
    if row.opened_at is not None and at is not None and at < row.opened_at:
        raise Refused(
            "The check is said to be made before the setup was opened.",
            do="Give the time of the check.",
            field="at",
        )
    opened = setups.opening_of(record, setup)
    wanted = [u.mark for u in opened.used] + [c.mark for c in checks]
    state = state_then(record, at, wanted)
    stand = setups.stand_of(state, opened, [c.mark for c in checks], at)
    return setup_checks.checks_of(stand, checks, closing=closing)
