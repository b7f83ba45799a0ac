"""Requests of two companies, a visit, a handover and a hold in both jobs."""

from __future__ import annotations

from django.utils import timezone

from jobs.actions import handovers, holds, requests, visits
from jobs.models import Request, Visit
from stakes.models import Mark
from tests.jobs.cast import CANARY_PERSON
from tests.pages.walk import World, example, furnish


@furnish
def days(world: World) -> None:
    cast = world.cast
    for job in (world.here, world.elsewhere):
        record = job.record
        marks = list(
            Mark.objects.filter(record=record).values_list("key", flat=True)[:2]
        )
        asks = [
            requests.make_request(
                record=record,
                company=who.company,
                sort="re-stake",
                words=f"asked by {who.name}"
                if who is cast.mason
                else "by the haul road",
                by=cast.by,
            )
            for who in (cast.contractor, cast.mason)
        ]
        visits.plan_visit(
            record=record,
            starts_at=timezone.now(),
            tasks=[visits.task_for(r) for r in Request.objects.filter(key__in=asks)],
            by=cast.by,
        )
        if marks:
            for who in (cast.contractor, cast.mason):
                handovers.hand_over(
                    record=record,
                    company=who.company,
                    listed=marks,
                    signature="signed",
                    to_whom=CANARY_PERSON if who is cast.mason else "Superintendent",
                    in_spite=True,
                    by=cast.by,
                )
            holds.send_hold(record=record, listed=marks, reason="re-check", by=cast.by)


@example("jobs:task-end")
def task(world: World, record):
    visit = Visit.objects.filter(record=record).first()
    return {"visit": visit.key, "task": visit.tasks[0]["task"]}
