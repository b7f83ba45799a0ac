"""Open a job, describe it anew, close it and open it again."""

from __future__ import annotations

import re
import uuid
from datetime import date, datetime
from zoneinfo import ZoneInfo

from django.db import IntegrityError, transaction
from django.utils import timezone

from geometry.units import Unit
from jobs.actions.checked import checked_factor, checked_text, refuse_zone
from jobs.defaults import HOLD_MINUTES, default_classes, default_payers
from jobs.kinds.opening import JobClosed, JobDescribed, JobOpened, JobReopened
from jobs.kinds.terms import (
    FrameSet,
    HoldTimeSet,
    NoticeRule,
    NoticeRuleSet,
    RestakeTermsSet,
    Term,
    ToleranceClassesSet,
)
from jobs.models import Job
from stakes.models import Record
from stakes.record import By, Known, Refused, append

NUMBER = re.compile(r"[A-Za-z0-9][A-Za-z0-9._-]{0,19}")
TAKEN_BY_PAGES = {"open", "closed"}
"""Words that stand in addresses where a job's number stands."""


def open_job(
    *,
    number: str,
    name: str,
    unit: Unit,
    zone: str,
    by: By,
    place: str = "",
    frame: str = "",
    combined_factor: str = "",
    notice: NoticeRule | None = None,
    at: datetime | None = None,
) -> Job:
    """Open a job: its record, the opening entry and the terms it starts with."""
    number = number.strip()
    _refuse_number(number)
    name = checked_text(name, "name", most=120)
    place = checked_text(place, "place", most=200, required=False)
    refuse_zone(zone)
    key = uuid.uuid4()
    opened = JobOpened(
        job=key, number=number, name=name, unit=unit, zone=zone, place=place
    )
    day = (at or timezone.now()).astimezone(ZoneInfo(zone)).date()
    terms = _first_terms(day, unit, frame.strip(), combined_factor, notice)
    try:
        with transaction.atomic():
            record = Record.objects.create(number=number, unit=str(unit), zone=zone)
            append(record, [opened, *terms], by=by, at=at, known=Known.DECIDED)
            return Job.objects.select_related("record").get(pk=key)
    except IntegrityError as error:
        raise _taken(number) from error


def describe_job(
    *, record: Record, name: str, place: str, by: By, at: datetime | None = None
) -> None:
    """Write name and place of the job anew."""
    fact = JobDescribed(
        job=record.job.key,
        name=checked_text(name, "name", most=120),
        place=checked_text(place, "place", most=200, required=False),
    )
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def close_job(*, record: Record, why: str, by: By, at: datetime | None = None) -> None:
    """End work for a job. Nothing is lost, and late facts are still welcome."""
    if record.job.closed_at is not None:
        raise Refused("The job is closed already.", code="closed")
    fact = JobClosed(job=record.job.key, why=why.strip())
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def reopen_job(*, record: Record, why: str, by: By, at: datetime | None = None) -> None:
    """Begin work for a closed job again."""
    if record.job.closed_at is None:
        raise Refused("The job is open already.", code="open")
    fact = JobReopened(job=record.job.key, why=why.strip())
    append(record, fact, by=by, at=at, known=Known.DECIDED)


def _refuse_number(number: str) -> None:
    if not NUMBER.fullmatch(number) or number.lower() in TAKEN_BY_PAGES:
        raise Refused(
            f"{number!r} cannot stand in the address of a job.",
            do="Use up to 20 letters, digits, points, hyphens or underscores, "
            "beginning with a letter or digit, like 2614.",
            field="number",
        )
    if Record.objects.filter(number__iexact=number).exists():
        raise _taken(number)


def _taken(number: str) -> Refused:
    return Refused(
        f"There is a job {number} already.",
        do="Give this one another number.",
        field="number",
        code="taken",
    )


def _first_terms(
    day: date, unit: Unit, frame: str, factor: str, notice: NoticeRule | None
) -> list[Term]:
    def setting(kind: type[Term], **facts: object) -> Term:
        return kind(term=uuid.uuid4(), effective=day, **facts)

    terms = [
        setting(ToleranceClassesSet, classes=default_classes(unit)),
        setting(RestakeTermsSet, payers=default_payers()),
        setting(HoldTimeSet, minutes=HOLD_MINUTES),
    ]
    if frame:
        factor = checked_factor(factor)
        terms.append(setting(FrameSet, frame=frame, combined_factor=factor))
    if notice:
        terms.append(setting(NoticeRuleSet, rule=notice))
    return terms
