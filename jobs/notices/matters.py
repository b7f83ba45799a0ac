"""Who is told what: from an entry to the letters it makes. Reads, never writes.

It is total: whatever an entry says, it makes letters or none. A letter that could not
be written would hold up every later one of its job.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from jobs.kinds import handovers, holds, requests, visits
from jobs.models import Hold, Request, User, Visit
from jobs.queries.holders import holders
from jobs.queries.seats import office, people_of, seat_now
from stakes.models import Mark, Record
from stakes.queries.drawing import natural
from stakes.record import Counted
from stakes.templatetags.lathbook import moment_words

MOST_NAMED = 30


@dataclass(frozen=True, slots=True)
class Letter:
    """One letter to one reader."""

    to: User
    subject: str
    body: str


def letters(record: Record, said: Counted) -> Iterator[Letter]:
    """The letters an entry makes; most entries make none."""
    fact = said.fact
    match fact:
        case requests.RequestMade():
            built = "Work built from stakes asked about" if fact.built_from else ""
            told = _asked(record, fact)
            yield from _to(office(), built or "Request received", told, record, said)
        case requests.RequestAccepted(ask=ask):
            told = _accepted(record, fact)
            yield from _to(_asker(record, ask), "Request accepted", told, record, said)
        case requests.RequestDeclined(ask=ask, reason=reason):
            told = [f"Your request is declined: {reason}"]
            yield from _to(_asker(record, ask), "Request declined", told, record, said)
        case requests.RequestTalkedOver(ask=ask, words=words):
            both = [*_asker(record, ask), *office()]
            others = [user for user in both if str(user.pk) != said.person]
            yield from _to(others, "About a request", [words], record, said)
        case visits.VisitPlanned():
            crew = _seated(record, [m.person for m in fact.members])
            yield from _to(crew, "Visit planned", _visit(record, fact), record, said)
        case visits.VisitCancelled():
            crew = _seated(record, _crew_of(record, fact.visit))
            told = [f"The visit will not take place: {fact.reason}"]
            yield from _to(crew, "Visit cancelled", told, record, said)
        case handovers.HandedOver(company=company):
            readers = people_of(record, company)
            told = _given(record, fact)
            yield from _to(readers, "Stakes handed over", told, record, said)
        case holds.HoldSent():
            yield from _hold_sent(record, fact, said)
        case holds.HoldLifted():
            yield from _hold_lifted(record, fact, said)


def _asked(record: Record, fact: requests.RequestMade) -> list[str]:
    lines = [f"{fact.company_name} asks to {fact.sort}."]
    if fact.built_from:
        lines.append(f"Built from them already: {fact.built_from}. Ring them now.")
    lines += [fact.words, _named(record, fact.listed)]
    if fact.needed_by:
        lines.append(f"Needed by: {_when(fact.needed_by, record)}.")
    if fact.earliest:
        rule = f"{_when(fact.earliest, record)} ({fact.notice_rule})"
        lines.append(f"Earliest under the notice rule: {rule}.")
    return lines


def _accepted(record: Record, fact: requests.RequestAccepted) -> list[str]:
    lines = ["Your request is accepted."]
    if fact.promised_for:
        lines.append(f"Promised for: {_when(fact.promised_for, record)}.")
    if fact.payer:
        reason = f" ({fact.payer_reason})" if fact.payer_reason else ""
        lines.append(f"Cost borne by: {fact.payer}{reason}.")
    return [*lines, fact.words]


def _visit(record: Record, fact: visits.VisitPlanned) -> list[str]:
    lines = [f"{fact.crew or 'You'}: on site {_when(fact.starts_at, record)}."]
    if fact.ends_at:
        lines.append(f"Until: {_when(fact.ends_at, record)}.")
    for task in fact.tasks:
        words = f": {task.words}" if task.words else ""
        lines.append(f"- {task.sort.capitalize()}{words} {_named(record, task.listed)}")
    return [*lines, fact.words]


def _given(record: Record, fact: handovers.HandedOver) -> list[str]:
    lines = [
        f"{_stakes(len(fact.listed))} handed over to {fact.company_name}.",
        _named(record, fact.listed),
    ]
    if fact.lacking:
        lines.append("Something was lacking: " + "; ".join(fact.lacking) + ".")
    lines.append("Please acknowledge or decline them, and keep machines off them.")
    return lines


def _hold_sent(record: Record, fact: holds.HoldSent, said: Counted) -> Iterator[Letter]:
    """Neutral words; each holder reads the marks that were given to it, no others'."""
    for holder in holders(record, fact.listed):
        if str(holder.company) not in fact.to_companies:
            continue
        told = [
            fact.words,
            _named(record, holder.marks),
            "Please open the hold in Lathbook and say that you have read it.",
        ]
        readers = people_of(record, str(holder.company))
        yield from _to(readers, "Hold pending re-check", told, record, said)


def _hold_lifted(
    record: Record, fact: holds.HoldLifted, said: Counted
) -> Iterator[Letter]:
    hold = Hold.objects.filter(record=record, key=fact.hold).first()
    to = hold.companies if hold else []
    for holder in holders(record, fact.listed):
        if str(holder.company) not in to:
            continue
        lifted = set(map(str, fact.listed))
        marks = [mark for mark in holder.marks if mark in lifted]
        told = [f"The hold is lifted: {fact.reason}", _named(record, marks)]
        readers = people_of(record, str(holder.company))
        yield from _to(readers, "Hold lifted", told, record, said)


def _to(
    readers: Iterable[User],
    subject: str,
    told: Iterable[str],
    record: Record,
    said: Counted,
) -> Iterator[Letter]:
    job = getattr(record, "job", None)
    name = f"Job {record.number}{f', {job.name}' if job else ''}"
    lines = "\n".join(line.strip() for line in told if line.strip())
    body = (
        f"{name}\n\n{lines}\n\n"
        f"Said by {said.name}, {_when(said.happened_at, record)}, entry {said.number}.\n"
        "Lathbook computes, keeps and warns; the licensed surveyor decides.\n"
    )
    # A line break in a subject is refused when the letter is sent.
    head = " ".join(f"{name}: {subject}".split())[:200]
    for reader in {user.pk: user for user in readers}.values():
        yield Letter(reader, head, body)


def _asker(record: Record, ask: UUID) -> list[User]:
    request = Request.objects.filter(record=record, key=ask).first()
    return _seated(record, [request.asked_by_id]) if request else []


def _crew_of(record: Record, visit: UUID) -> list[str]:
    row = Visit.objects.filter(record=record, key=visit).first()
    return [member["person"] for member in row.members] if row else []


def _seated(record: Record, persons: Iterable[str]) -> list[User]:
    """Those of them who have a seat on the job now; nobody else learns of it."""
    keys = [key for person in persons if (key := _uuid(person))]
    found = User.objects.filter(is_active=True, pk__in=keys)
    return [user for user in found if seat_now(record, user)]


def _uuid(text: str) -> UUID | None:
    """Who said an entry need not be an account: a program, or paper."""
    try:
        return UUID(text)
    except ValueError:
        return None


def _named(record: Record, listed: Iterable[object]) -> str:
    """Marks by their numbers, in the order people count."""
    rows = Mark.objects.filter(record=record, key__in=list(listed))
    labels = sorted(rows.values_list("label", flat=True), key=natural)
    if not labels:
        return ""
    more = len(labels) - MOST_NAMED
    tail = f" and {more} more" if more > 0 else ""
    return f"Marks: {', '.join(labels[:MOST_NAMED])}{tail}."


def _stakes(count: int) -> str:
    return "1 stake was" if count == 1 else f"{count} stakes were"


def _when(at: datetime, record: Record) -> str:
    return moment_words(at.astimezone(record.time_zone))
