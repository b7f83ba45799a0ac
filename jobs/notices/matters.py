"""Who is told what: from an entry to the letters it makes. Reads, never writes."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from datetime import datetime

from django.utils import timezone

from jobs.kinds import handovers, holds, requests, visits
from jobs.models import Hold, Request, User
from jobs.queries.seats import in_force
from stakes.models import Mark, Record
from stakes.record import Counted
from stakes.templatetags.lathbook import moment_words


@dataclass(frozen=True, slots=True)
class Letter:
    """One letter to one reader."""

    to: str
    subject: str
    body: str


def letters(record: Record, said: Counted) -> Iterator[Letter]:
    """The letters an entry makes; most entries make none."""
    match said.fact:
        case requests.RequestMade() as made:
            built = "Work was built from them. " if made.built_from else ""
            words = f"{made.company_name} asks to {made.sort}. {built}{made.words}"
            yield from _to(_office(), "Request received", words, record, said)
        case requests.RequestAccepted(ask=ask, promised_for=promised):
            when = f" Promised for {_when(promised, record)}." if promised else ""
            words = f"Your request is accepted.{when}"
            yield from _to(_asker(record, ask), "Request accepted", words, record, said)
        case requests.RequestDeclined(ask=ask, reason=reason):
            words = f"Your request is declined: {reason}"
            yield from _to(_asker(record, ask), "Request declined", words, record, said)
        case requests.RequestTalkedOver(ask=ask, words=words):
            readers = [*_asker(record, ask), *_office()]
            others = [user for user in readers if str(user.pk) != said.person]
            yield from _to(others, "About a request", words, record, said)
        case visits.VisitPlanned() as plan:
            people = [member.person for member in plan.members if member.person]
            words = f"Visit {_when(plan.starts_at, record)}, {len(plan.tasks)} tasks."
            yield from _to(_people(people), "Visit planned", words, record, said)
        case handovers.HandedOver() as given:
            words = (
                f"{len(given.listed)} stakes were handed over: {_marks(given.listed)}."
            )
            words += " Please acknowledge them; keep machines off them."
            readers = _company(record, given.company)
            yield from _to(readers, "Stakes handed over", words, record, said)
        case holds.HoldSent() as sent:
            words = f"{sent.words}\n\nMarks: {_marks(sent.listed)}."
            readers = [u for c in sent.to_companies for u in _company(record, c)]
            yield from _to(readers, "Hold pending re-check", words, record, said)
        case holds.HoldLifted() as lifted:
            words = f"The hold is lifted for {_marks(lifted.listed)}: {lifted.reason}"
            hold = Hold.objects.filter(record=record, key=lifted.hold).first()
            companies = hold.companies if hold else []
            readers = [u for c in companies for u in _company(record, c)]
            yield from _to(readers, "Hold lifted", words, record, said)


def _to(
    readers: Iterable[User], subject: str, words: str, record: Record, said: Counted
) -> Iterator[Letter]:
    job = getattr(record, "job", None)
    name = f"Job {record.number}{f', {job.name}' if job else ''}"
    body = (
        f"{name}\n\n{words}\n\n"
        f"Said by {said.name}, {_when(said.happened_at, record)}, entry {said.number}.\n"
        "Lathbook computes, keeps and warns; the licensed surveyor decides.\n"
    )
    for reader in {user.email: user for user in readers}.values():
        yield Letter(reader.email, f"{name}: {subject}"[:200], body)


def _office() -> list[User]:
    return [u for u in User.objects.filter(is_active=True) if u.is_office]


def _people(keys: Iterable[str]) -> list[User]:
    return list(User.objects.filter(is_active=True, pk__in=list(keys)))


def _asker(record: Record, ask: object) -> list[User]:
    request = Request.objects.filter(record=record, key=ask).first()
    return _people([request.asked_by_id]) if request else []


def _company(record: Record, company: str) -> list[User]:
    """People of a company who hold a seat on the job now."""
    seats = record.seats.filter(in_force(timezone.now()), company=company)
    return _people(str(key) for key in seats.values_list("person", flat=True))


def _marks(listed: Iterable[object]) -> str:
    rows = Mark.objects.filter(key__in=list(listed)).order_by("label")
    labels = list(rows.values_list("label", flat=True))
    more = f" and {len(labels) - 20} more" if len(labels) > 20 else ""
    return ", ".join(labels[:20]) + more


def _when(at: datetime, record: Record) -> str:
    return moment_words(at.astimezone(record.time_zone))
