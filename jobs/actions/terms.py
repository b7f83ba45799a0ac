"""Set the terms of a job. Each setting says from which day it counts."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import date, datetime

from geometry.units import Unit
from jobs.actions.checked import checked_factor, refuse_zone
from jobs.kinds.terms import (
    FrameSet,
    HoldTimeSet,
    NoticeRule,
    NoticeRuleSet,
    Payer,
    RestakeTermsSet,
    ToleranceClass,
    ToleranceClassesSet,
    UnitAndZoneSet,
)
from jobs.models import Company
from jobs.notice import NeverWorks, counts_as_received
from jobs.queries.terms import terms_at
from stakes.models import EntryMark, Record
from stakes.record import By, Known, Refused, Said, append, held

LONGEST_NAME = 60
"""Letters in the name of a tolerance class; marks name theirs by it."""


def set_unit_and_zone(
    *,
    record: Record,
    unit: Unit,
    zone: str,
    effective: date,
    by: By,
    at: datetime | None = None,
) -> None:
    """Change unit or time zone, as long as no mark was entered in the old one."""
    refuse_zone(zone)
    fact = UnitAndZoneSet(term=uuid.uuid4(), effective=effective, unit=unit, zone=zone)
    with held(record) as locked:
        if EntryMark.objects.filter(record=record).exists():
            raise Refused(
                "Unit and time zone cannot change once the job has marks.",
                where="Coordinates and times in its record were given in them.",
                do="Open another job in the other unit and import the points there.",
                field="unit",
                code="has marks",
            )
        append(locked, fact, by=by, at=at, known=Known.DECIDED)
        Record.objects.filter(pk=record.pk).update(unit=str(unit), zone=zone)
    record.refresh_from_db()


def set_frame(
    *,
    record: Record,
    frame: str,
    effective: date,
    by: By,
    combined_factor: str = "",
    at: datetime | None = None,
) -> None:
    """Name the coordinate frame as the sheets name it."""
    if not frame.strip():
        raise Refused(
            "The frame has no name.", do="Copy it from the sheet.", field="frame"
        )
    fact = FrameSet(
        term=uuid.uuid4(),
        effective=effective,
        frame=frame.strip(),
        combined_factor=checked_factor(combined_factor),
    )
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def set_notice_rule(
    *,
    record: Record,
    rule: NoticeRule,
    effective: date,
    by: By,
    source: str = "",
    at: datetime | None = None,
) -> None:
    """Agree how much notice a request gives."""
    if rule.cut_off <= rule.day_begins:
        raise Refused(
            "The cut-off is before the working day begins.",
            do="Write both as times of one day, like 07:00 and 15:00.",
            field="cut_off",
        )
    try:
        start = datetime.combine(effective, rule.day_begins, record.time_zone)
        counts_as_received(start, rule, record.time_zone)
    except NeverWorks as error:
        raise Refused(
            str(error), do="Take out holidays or add weekdays.", field="holidays"
        ) from error
    fact = NoticeRuleSet(
        term=uuid.uuid4(), effective=effective, rule=rule, source=source.strip()
    )
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def set_tolerance_classes(
    *,
    record: Record,
    classes: Sequence[ToleranceClass],
    effective: date,
    by: By,
    at: datetime | None = None,
) -> None:
    """Set the whole list of tolerance classes."""
    names = [c.name.strip().lower() for c in classes]
    twice = next((n for n in names if names.count(n) > 1), None)
    if twice is not None:
        raise Refused(
            f"Two tolerance classes are called {twice!r}.",
            do="Give one of them another name.",
            field="name",
        )
    for tolerance in classes:
        _refuse_class(tolerance)
    fact = ToleranceClassesSet(
        term=uuid.uuid4(), effective=effective, classes=tuple(classes)
    )
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def keep_tolerance_class(
    *,
    record: Record,
    tolerance: ToleranceClass,
    effective: date,
    by: By,
    at: datetime | None = None,
) -> None:
    """Add a class, or write the one with its key anew; the others stay as they stand."""
    with held(record) as locked:
        classes = list(terms_at(locked, effective).classes)
        places = [n for n, c in enumerate(classes) if c.key == tolerance.key]
        where = places[0] if places else len(classes)
        classes[where : where + 1] = [tolerance]
        set_tolerance_classes(
            record=locked, classes=classes, effective=effective, by=by, at=at
        )


def take_out_tolerance_class(
    *,
    record: Record,
    key: uuid.UUID,
    effective: date,
    by: By,
    at: datetime | None = None,
) -> None:
    """Take a class out. Marks that name it keep its name and are held to nothing."""
    with held(record) as locked:
        standing = terms_at(locked, effective).classes
        set_tolerance_classes(
            record=locked,
            classes=[c for c in standing if c.key != key],
            effective=effective,
            by=by,
            at=at,
        )


def set_restake_terms(
    *,
    record: Record,
    payers: Sequence[Payer],
    effective: date,
    by: By,
    price: str = "",
    company: Company | None = None,
    at: datetime | None = None,
) -> None:
    """Agree who pays to set stakes again; the price stays a private part."""
    fact = RestakeTermsSet(
        term=uuid.uuid4(),
        effective=effective,
        payers=tuple(payers),
        company=str(company.pk) if company else "",
        company_name=company.name if company else "",
    )
    private = {"price": price.strip()} if price.strip() else {}
    said = Said(fact=fact, at=at, known=Known.DECIDED, private=private)
    append(record, said, by=by)


def set_hold_time(
    *,
    record: Record,
    minutes: int,
    effective: date,
    by: By,
    at: datetime | None = None,
) -> None:
    """Say how long a proposed hold waits for the surveyor."""
    if not 0 <= minutes <= 1440:
        raise Refused(
            "A hold waits at most a day.", do="Write 0 to 1440.", field="minutes"
        )
    fact = HoldTimeSet(term=uuid.uuid4(), effective=effective, minutes=minutes)
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def _refuse_class(tolerance: ToleranceClass) -> None:
    if not 0 < len(tolerance.name.strip()) <= LONGEST_NAME:
        raise Refused(
            "A tolerance class has no name, or a very long one.",
            do=f"Name it in 1 to {LONGEST_NAME} letters.",
            field="name",
        )
    for field in ("position", "elevation"):
        limit = getattr(tolerance, field)
        if limit is not None and limit.length.nanometres <= 0:
            raise Refused(
                f"The {field} tolerance of {tolerance.name} is not above zero.",
                do="Write how far off it may be, or leave it empty.",
                field=field,
            )
    if tolerance.position is None and tolerance.elevation is None:
        raise Refused(
            f"{tolerance.name} limits neither position nor elevation.",
            do="Give one of them, or take the class out.",
            field="position",
        )
