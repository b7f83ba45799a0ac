"""Requests of two companies, a visit, a handover and a hold in both jobs.

What concerns the masons alone is spelled with their own words everywhere it is kept:
in what they asked, what they were promised, the words to the crew, who was told.
"""

from __future__ import annotations

import uuid
from datetime import timedelta

from django.utils import timezone

from jobs.actions import handovers, holds, requests, visits
from jobs.models import Request, User, Visit
from jobs.queries.seats import by_of
from stakes.models import Mark, Record
from tests.jobs.cast import CANARY_PERSON, CANARY_PRICE
from tests.pages.walk import World, example, furnish

PHOTO = "0" * 64


@furnish
def days(world: World) -> None:
    cast = world.cast
    for job in (world.here, world.elsewhere):
        record = job.record
        marks = list(
            Mark.objects.filter(record=record).values_list("key", flat=True)[:2]
        )
        asks = [_ask(world, record, who) for who in (cast.contractor, cast.mason)]
        visits.plan_visit(
            record=record,
            starts_at=timezone.now(),
            tasks=[visits.task_for(r) for r in Request.objects.filter(key__in=asks)],
            words=f"{CANARY_PERSON} opens the gate",
            by=cast.by,
        )
        if marks:
            for who in (cast.contractor, cast.mason):
                _give(world, record, who, marks)
            _hold(world, record, marks)


def _ask(world: World, record: Record, who: User) -> uuid.UUID:
    masons = who is world.cast.mason
    ask = requests.make_request(
        record=record,
        company=who.company,
        sort="re-stake",
        words=f"asked by {who.name}" if masons else "by the haul road",
        built_from=f"a wall, says {CANARY_PERSON}" if masons else "",
        phone=who.phone,
        photos=[PHOTO],
        by=by_of(who),
    )
    requests.accept_request(
        record=record,
        ask=ask,
        promised_for=timezone.now() + timedelta(days=3),
        payer="contractor",
        payer_reason=CANARY_PRICE if masons else "re-stake terms",
        by=world.cast.by,
    )
    return ask


def _give(world: World, record: Record, who: User, marks: list[uuid.UUID]) -> None:
    masons = who is world.cast.mason
    handovers.hand_over(
        record=record,
        company=who.company,
        listed=marks,
        signature="signed",
        to_whom=CANARY_PERSON if masons else "Superintendent",
        in_spite=True,
        by=world.cast.by,
    )


def _hold(world: World, record: Record, marks: list[uuid.UUID]) -> None:
    by, mason = world.cast.by, world.cast.mason
    hold = holds.send_hold(record=record, listed=marks, reason="re-check", by=by)
    holds.hear_hold(
        record=record,
        hold=hold,
        how="told",
        company=str(mason.company.pk),
        company_name=mason.company.name,
        by_whom=CANARY_PERSON,
        by=by,
    )


@example("jobs:task-end")
def task(world: World, record):
    visit = Visit.objects.filter(record=record).first()
    return {"visit": visit.key, "task": visit.tasks[0]["task"]}


@example("jobs:request-photo")
def photo(world: World, record):
    """A photo the record names and whose file is not here: not found, never broken."""
    return {"ask": Request.objects.filter(record=record).first().key, "photo": 1}
