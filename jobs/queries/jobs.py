"""Which jobs there are, and which a person may open."""

from __future__ import annotations

from django.db.models import F, QuerySet
from django.utils import timezone

from jobs.models import Job, Seat, User
from jobs.queries.seats import in_force


def job_called(number: str) -> Job | None:
    """The job with this number, with its record."""
    return Job.objects.select_related("record").filter(record__number=number).first()


def jobs_of(person: User) -> QuerySet[Job]:
    """The jobs a person may open: all for the office, else those with a seat now."""
    jobs = Job.objects.select_related("record")
    if not person.is_office:
        seated = Seat.objects.filter(in_force(timezone.now()), person=person)
        jobs = jobs.filter(record__in=seated.values("record"))
    return jobs.order_by(
        F("closed_at").asc(nulls_first=True), "-record__head_recorded_at"
    )
