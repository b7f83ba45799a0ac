"""Requests: ask for stakes, decide, talk it over, answer the cost, take back, close."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from django.utils import timezone

from jobs.actions.checked import checked_text
from jobs.kinds.requests import (
    AskSort,
    CostAnswered,
    RequestAccepted,
    RequestClosed,
    RequestDeclined,
    RequestMade,
    RequestTalkedOver,
    RequestWithdrawn,
)
from jobs.models import Company, Request
from jobs.notice import NeverWorks, earliest_under_notice
from jobs.queries.terms import terms_at, today
from stakes.models import Entry, Mark, Record
from stakes.record import By, Fact, Known, Refused, Said, append, held

OPEN = ("received", "accepted", "scheduled")
"""States in which something is still to be done."""


def make_request(
    *,
    record: Record,
    company: Company,
    sort: AskSort,
    listed: Sequence[UUID] = (),
    words: str = "",
    needed_by: datetime | None = None,
    last_seen: str = "",
    cause: str = "",
    cause_by: str = "",
    built_from: str = "",
    sheet: UUID | None = None,
    sheet_words: str = "",
    site_ready: str = "",
    phone: str = "",
    remark: str = "",
    photos: Sequence[str] = (),
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> UUID:
    """Ask for stakes; returns the key of the request, whose page is its receipt.

    The earliest time under the notice rule is worked out and kept with the rule; it
    promises nothing. The same `key` sent twice is one request.
    """
    words = checked_text(words, "words", most=2000, required=not listed)
    ask = key or uuid.uuid4()
    with held(record) as locked:
        if Request.objects.filter(record=record, key=ask).exists():
            return ask
        _refuse_unknown_marks(locked, listed)
        earliest, rule = _earliest(locked, company, at or timezone.now())
        fact = RequestMade(
            ask=ask,
            sort=sort,
            company=str(company.pk),
            company_name=company.name,
            listed=tuple(listed),
            words=words,
            needed_by=needed_by,
            earliest=earliest,
            notice_rule=rule,
            last_seen=last_seen.strip(),
            cause=cause.strip(),
            cause_by=cause_by.strip(),
            built_from=built_from.strip(),
            sheet=sheet,
            sheet_words=sheet_words.strip(),
            site_ready=site_ready.strip(),
            photos=tuple(photos),
        )
        private = {"phone": phone.strip(), "remark": remark.strip()}
        said = Said(
            fact=fact,
            at=at,
            known=Known.TOLD,
            private={name: text for name, text in private.items() if text},
        )
        append(locked, said, by=by)
    return ask


def _refuse_unknown_marks(record: Record, listed: Sequence[UUID]) -> None:
    known = Mark.objects.filter(record=record, key__in=listed).count()
    if known != len(set(listed)):
        raise Refused(
            "One of the marks asked for is not on this job.",
            do="Choose the marks again from the plan or the list.",
            field="listed",
            code="unknown mark",
        )


def _earliest(
    record: Record, company: Company, received: datetime
) -> tuple[datetime | None, str]:
    rule = terms_at(record, today(record), company=str(company.pk)).notice_rule
    if rule is None:
        return None, ""
    try:
        earliest = earliest_under_notice(received, rule, record.time_zone)
    except NeverWorks:
        return None, ""
    return earliest, f"{rule.count} {rule.of}, received by {rule.cut_off:%H:%M}"


def accept_request(
    *,
    record: Record,
    ask: UUID,
    promised_for: datetime | None = None,
    payer: str = "",
    payer_reason: str = "",
    words: str = "",
    by: By,
    at: datetime | None = None,
) -> None:
    """Accept a request and, if a time is given, promise it."""
    fact = RequestAccepted(
        ask=ask,
        promised_for=promised_for,
        payer=payer.strip(),
        payer_reason=payer_reason.strip(),
        words=words.strip(),
    )
    _say(record, ask, fact, by, at, open_only=True)


def decline_request(
    *, record: Record, ask: UUID, reason: str, by: By, at: datetime | None = None
) -> None:
    """Decline a request; the reason is what the asker reads."""
    reason = checked_text(reason, "reason", most=1000)
    _say(record, ask, RequestDeclined(ask=ask, reason=reason), by, at, open_only=True)


def talk_over(
    *, record: Record, ask: UUID, words: str, by: By, at: datetime | None = None
) -> None:
    """Ask back or answer; both sides read it on the request's page."""
    words = checked_text(words, "words", most=2000)
    _say(record, ask, RequestTalkedOver(ask=ask, words=words), by, at)


def answer_cost(
    *,
    record: Record,
    ask: UUID,
    accepted: bool,
    words: str = "",
    by: By,
    at: datetime | None = None,
) -> None:
    """Accept the cost of a request before the work, or dispute it with a word."""
    words = checked_text(words, "reason", most=1000, required=not accepted)
    _say(record, ask, CostAnswered(ask=ask, accepted=accepted, words=words), by, at)


def withdraw_request(
    *, record: Record, ask: UUID, reason: str = "", by: By, at: datetime | None = None
) -> None:
    """Take a request back, as long as it is open."""
    fact = RequestWithdrawn(ask=ask, reason=reason.strip())
    _say(record, ask, fact, by, at, open_only=True)


def close_request(
    *,
    record: Record,
    ask: UUID,
    listed: Sequence[UUID] = (),
    handover: UUID | None = None,
    words: str = "",
    by: By,
    at: datetime | None = None,
) -> None:
    """Close a request with the stakes it brought, or with why it brought none."""
    if not listed and not words.strip():
        raise Refused(
            "The request closes without stakes and without a word.",
            do="Say why it brought none.",
            field="words",
        )
    fact = RequestClosed(
        ask=ask, listed=tuple(listed), handover=handover, words=words.strip()
    )
    _say(record, ask, fact, by, at, open_only=True)


def _say(
    record: Record,
    ask: UUID,
    fact: Fact,
    by: By,
    at: datetime | None,
    *,
    open_only: bool = False,
) -> Entry:
    with held(record) as locked:
        request = Request.objects.filter(record=record, key=ask).first()
        if request is None:
            raise Refused("There is no such request on this job.", code="no request")
        if open_only and request.state not in OPEN:
            raise Refused(
                f"The request is {request.state} already.",
                do="Make a new request if something is still needed.",
                code="not open",
            )
        said = Said(fact=fact, at=at, known=Known.DECIDED)
        return append(locked, said, by=by)[0]
