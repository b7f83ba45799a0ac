"""What the start page asks of each person: requests, visits, handovers, holds."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Sequence
from datetime import timedelta

from django.urls import reverse
from django.utils import timezone

from jobs.models import Handover, Hold, Request, User, Visit
from jobs.needing import Needing, asks
from stakes.models import Record


@asks
def requests_waiting(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """The office decides what was received; what was built upon comes first."""
    if not person.is_office:
        return
    waiting = Request.objects.filter(record__in=records, state="received")
    by_record = {record.pk: record for record in records}
    for record, count in Counter(r.record_id for r in waiting).items():
        built = any(r.built_from for r in waiting if r.record_id == record)
        words = f"{count} request{'s' if count > 1 else ''} to decide"
        words += ", work built from the stakes" if built else ""
        to = reverse("jobs:requests", kwargs={"job": by_record[record].number})
        yield Needing(record, words, to)


@asks
def visits_today(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Who is on a crew sees its next visit of this day and the next."""
    soon = timezone.now() + timedelta(days=1)
    coming = Visit.objects.filter(
        record__in=records, left_at=None, cancelled="", starts_at__lte=soon
    )
    by_record = {record.pk: record for record in records}
    for visit in coming.order_by("starts_at"):
        if any(m.get("person") == str(person.pk) for m in visit.members):
            record = by_record[visit.record_id]
            at = visit.starts_at.astimezone(record.time_zone)
            to = reverse(
                "jobs:visit", kwargs={"job": record.number, "visit": visit.key}
            )
            yield Needing(record.pk, f"Visit {at:%a %H:%M}", to)


@asks
def handovers_to_answer(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Stakes handed over to the person's company, not yet acknowledged."""
    found = Handover.objects.filter(
        record__in=records, company=str(person.company_id), answer=""
    )
    by_record = {record.pk: record for record in records}
    for record, count in Counter(h.record_id for h in found).items():
        words = f"{count} handover{'s' if count > 1 else ''} to acknowledge"
        to = reverse("jobs:handovers", kwargs={"job": by_record[record].number})
        yield Needing(record, words, to)


@asks
def holds_to_read(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Holds in force that the person's company has not acknowledged."""
    company = str(person.company_id)
    by_record = {record.pk: record for record in records}
    for hold in Hold.objects.filter(record__in=records, lifted_at=None):
        said = [h for h in hold.heard if h["how"] == "acknowledged"]
        if company in hold.companies and company not in [h["company"] for h in said]:
            record = by_record[hold.record_id]
            to = reverse("jobs:hold", kwargs={"job": record.number, "hold": hold.key})
            yield Needing(record.pk, "A hold: do not build from these stakes", to)
