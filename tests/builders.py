"""Plain functions that put a small record together, for tests."""

from __future__ import annotations

import uuid
from datetime import UTC, datetime, timedelta

from geometry.units import Length, Unit
from stakes.kinds.planning import MarksPlanned, PlannedMark
from stakes.kinds.setting import StakeSet
from stakes.kinds.setups import SetupCheck, SetupOpened, UsedMark
from stakes.models import Record
from stakes.record import By, append
from stakes.record.lengths import Measured

MORNING = datetime(2026, 3, 2, 14, 0, tzinfo=UTC)
CHIEF = By(person="party-chief", name="Party chief")
SURVEYOR = By(person="surveyor", name="Licensed surveyor")


def after(minutes: float) -> datetime:
    """A moment so many minutes into the tests' first working day."""
    return MORNING + timedelta(minutes=minutes)


def make_record(number: str = "2614", unit: str = "ft") -> Record:
    return Record.objects.create(number=number, unit=unit, zone="America/Chicago")


def measured(text: str, unit: Unit = Unit.FOOT) -> Measured:
    return Measured.of(Length.parse(text, unit))


def row(label: str, n: str, e: str, z: str = "", **more: object) -> PlannedMark:
    """A planned mark; purpose "stake" unless said otherwise."""
    return PlannedMark(
        **{
            "mark": uuid.uuid4(),
            "label": label,
            "purpose": "stake",
            "northing": measured(n),
            "easting": measured(e),
            "elevation": measured(z) if z else None,
            **more,
        }  # type: ignore[arg-type]
    )


def plan(record: Record, *rows: PlannedMark, at: datetime = MORNING) -> list[uuid.UUID]:
    append(record, MarksPlanned(plan=uuid.uuid4(), rows=rows), by=SURVEYOR, at=at)
    return [r.mark for r in rows]


def open_setup(
    record: Record,
    used: list[uuid.UUID],
    check: uuid.UUID | None = None,
    verdict: str = "pass",
    at: datetime = MORNING,
) -> uuid.UUID:
    setup = uuid.uuid4()
    checks = (
        (SetupCheck(mark=check, quantity="position", verdict=verdict),)  # type: ignore[arg-type]
        if check
        else ()
    )
    append(
        record,
        SetupOpened(
            setup=setup,
            sort="total station on a mark",
            used=tuple(UsedMark(mark=m, role="oriented on") for m in used),
            checks=checks,
        ),
        by=CHIEF,
        at=at,
    )
    return setup


def set_stake(
    record: Record,
    mark: uuid.UUID,
    setup: uuid.UUID | None,
    at: datetime,
    **more: object,
) -> None:
    append(record, StakeSet(mark=mark, setup=setup, **more), by=CHIEF, at=at)  # type: ignore[arg-type]
