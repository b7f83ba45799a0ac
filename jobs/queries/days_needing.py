"""What the start page asks of each person: requests, costs, visits, handovers, holds."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Sequence
from datetime import timedelta

from django.urls import reverse
from django.utils import timezone

from jobs.defaults.payers import OWNER, SURVEYOR
from jobs.models import Handover, Hold, Request, User, Visit
from jobs.needing import Needing, asks
from jobs.queries.proposals import proposal, with_doubts
from jobs.queries.seats import SeatThen, seats_on
from jobs.rights import OF_THE_FIRM, Role, rights_of
from stakes.can import Can
from stakes.models import Record

SOON = timedelta(days=1)


@asks
def proposed_holds(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Doubt proposes a hold at once to whoever can send one."""
    for record in with_doubts(_who_may(person, records, Can.SEND_HOLD)):
        if proposed := proposal(record):
            words = f"{_count(len(proposed.all), 'mark')} in question, under no hold"
            if proposed.built:
                words = f"Work built from doubtful stakes: {words}"
            yield _line(record, words, "jobs:holds")


@asks
def requests_waiting(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """The office decides what was received; what was built upon comes first."""
    if not person.is_office:
        return
    waiting = Request.objects.filter(
        record__in=records, state__in=("received", "accepted")
    )
    by_record: dict[int, list[Request]] = defaultdict(list)
    for request in waiting:
        by_record[request.record_id].append(request)
    for record in records:
        found = by_record[record.pk]
        undecided = [r for r in found if r.state == "received"]
        if undecided:
            words = f"{_count(len(undecided), 'request')} to decide"
            if any(r.built_from for r in undecided):
                words += ", work built from the stakes"
            yield _line(record, words, "jobs:requests")
        if unplaced := len(found) - len(undecided):
            words = f"{_count(unplaced, 'accepted request')} on no visit yet"
            yield _line(record, words, "jobs:requests")


@asks
def visits_today(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Who is on a crew sees its visits of this day and the next, and any not ended."""
    coming = Visit.objects.filter(
        record__in=records,
        left_at=None,
        cancelled="",
        starts_at__lte=timezone.now() + SOON,
    )
    by_record = {record.pk: record for record in records}
    for visit in coming.order_by("starts_at"):
        if any(m.get("person") == str(person.pk) for m in visit.members):
            record = by_record[visit.record_id]
            at = visit.starts_at.astimezone(record.time_zone)
            to = reverse(
                "jobs:visit", kwargs={"job": record.number, "visit": visit.key}
            )
            words = f"Visit {at:%a} {at.day} {at:%b}, {at:%H:%M}"
            yield Needing(record.pk, words, to)


@asks
def costs_to_answer(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Costs to be accepted before the work: by who asked, or by the owner's inspector."""
    seats = _seats(person, records, Can.ACCEPT_COST)
    if not seats:
        return
    open_ones = Request.objects.filter(
        record__in=seats, cost="", state__in=("accepted", "scheduled")
    ).exclude(payer__in=("", SURVEYOR))
    by_record = {record.pk: record for record in records}
    for request in open_ones.order_by("received_at"):
        seat = seats[request.record_id]
        owners = Role.INSPECTOR in seat.roles
        if owners if request.payer == OWNER else request.company == seat.company:
            record = by_record[request.record_id]
            to = reverse(
                "jobs:request-cost", kwargs={"job": record.number, "ask": request.key}
            )
            yield Needing(record.pk, f"The cost of a {request.sort} to answer", to)


@asks
def handovers_to_answer(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Stakes handed over to the person's company, not yet acknowledged."""
    seats = _seats(person, records, Can.SIGN)
    if not seats:
        return
    found = Handover.objects.filter(record__in=seats, answer="")
    own = [h.record_id for h in found if h.company == seats[h.record_id].company]
    for record in records:
        if count := own.count(record.pk):
            words = f"{_count(count, 'handover')} to acknowledge"
            yield _line(record, words, "jobs:handovers")


@asks
def holds_to_read(person: User, records: Sequence[Record]) -> Iterator[Needing]:
    """Holds in force that the person's company has not acknowledged."""
    seats = _seats(person, records, Can.ACKNOWLEDGE)
    if not seats:
        return
    by_record = {record.pk: record for record in records}
    for hold in Hold.objects.filter(record__in=seats, lifted_at=None):
        company = seats[hold.record_id].company
        said = [h["company"] for h in hold.heard if h["how"] == "acknowledged"]
        if company in hold.companies and company not in said:
            record = by_record[hold.record_id]
            to = reverse("jobs:hold", kwargs={"job": record.number, "hold": hold.key})
            yield Needing(record.pk, "A hold: do not build from these stakes", to)


def _seats(person: User, records: Sequence[Record], right: Can) -> dict[int, SeatThen]:
    """The jobs on which a person outside the office has this right."""
    if person.is_office:
        return {}
    seats = seats_on(person, records)
    return {key: seat for key, seat in seats.items() if right in seat.rights}


def _who_may(person: User, records: Sequence[Record], right: Can) -> list[Record]:
    """What the firm gives its people stands on every job; nothing is looked up."""
    return list(records) if right in rights_of(OF_THE_FIRM[person.firm_role]) else []


def _line(record: Record, words: str, page: str) -> Needing:
    return Needing(record.pk, words, reverse(page, kwargs={"job": record.number}))


def _count(count: int, word: str) -> str:
    return f"{count} {word}{'' if count == 1 else 's'}"
