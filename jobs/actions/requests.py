"""Requests: ask for stakes, decide, talk it over, answer the cost, take back, close.

The same `key` sent twice is one act, everywhere here.
"""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from django.utils import timezone

from jobs.actions.checked import checked_text, refuse_unknown_marks
from jobs.actions.keyed import keyed
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
from jobs.queries.terms import terms_at
from stakes.models import Entry, Record
from stakes.record import By, Fact, Known, Refused, Said, append, held
from stakes.record.kinds import facts_as_data

OPEN = ("received", "accepted", "scheduled")
"""States in which something is still to be done."""

MOST_MARKS = 2000


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
    promises nothing. `at` is when the firm received it, by telephone say; None: now.
    """
    said = {
        "sort": sort,
        "company": str(company.pk),
        "listed": tuple(listed),
        "words": checked_text(words, "words", most=2000, required=not listed),
        "needed_by": needed_by,
        "last_seen": _short(last_seen, "last_seen"),
        "cause": _short(cause, "cause"),
        "cause_by": _short(cause_by, "cause_by"),
        "built_from": _short(built_from, "built_from"),
        "sheet": sheet,
        "sheet_words": _short(sheet_words, "sheet_words"),
        "site_ready": _short(site_ready, "site_ready"),
        "photos": tuple(photos),
    }
    private = {"phone": _short(phone, "phone"), "remark": _short(remark, "remark")}
    private = {name: text for name, text in private.items() if text}
    ask = key or uuid.uuid4()

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            _refuse_request(locked, ask, listed, needed_by, at)
            earliest, rule = _earliest(locked, company, at or timezone.now())
            fact = RequestMade(
                ask=ask,
                company_name=company.name,
                earliest=earliest,
                notice_rule=rule,
                **said,  # type: ignore[arg-type]
            )
            told = Said(fact=fact, at=at, known=Known.TOLD, key=ask, private=private)
            return append(locked, told, by=by, act=act)

    keyed(record, key, {**said, "private": private, "at": at}, do)
    return ask


def _short(text: str, field: str) -> str:
    return checked_text(text, field, most=500, required=False)


def _refuse_request(
    record: Record,
    ask: UUID,
    listed: Sequence[UUID],
    needed_by: datetime | None,
    at: datetime | None,
) -> None:
    if len(listed) > MOST_MARKS:
        raise Refused(
            f"{len(listed)} marks are asked for at once.",
            do=f"Name at most {MOST_MARKS}; ask for the others in a second request.",
            field="listed",
        )
    refuse_unknown_marks(record, listed)
    if needed_by is not None and needed_by < (at or timezone.now()):
        raise Refused(
            "They are needed by a time that is past.",
            do="Check the date. If they were needed before now, leave it empty and "
            "telephone.",
            field="needed_by",
        )
    if Request.objects.filter(key=ask).exclude(record=record).exists():
        raise Refused(
            "This form belongs to another job.",
            do="Open a new form on this job.",
            code="conflict",
        )


def _earliest(
    record: Record, company: Company, received: datetime
) -> tuple[datetime | None, str]:
    """Under the rule that was in force on the day it was received."""
    day = received.astimezone(record.time_zone).date()
    rule = terms_at(record, day, company=str(company.pk)).notice_rule
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
    key: UUID | None = None,
) -> None:
    """Accept a request and, if a time is given, promise it."""
    if promised_for is not None and promised_for < (at or timezone.now()):
        raise Refused(
            "The promised time is past.",
            do="Promise a time to come, or leave it empty.",
            field="promised_for",
        )
    fact = RequestAccepted(
        ask=ask,
        promised_for=promised_for,
        payer=checked_text(payer, "payer", most=120, required=False),
        payer_reason=_short(payer_reason, "payer_reason"),
        words=checked_text(words, "words", most=1000, required=False),
    )
    _say(record, ask, fact, by, at, key, open_only=True)


def decline_request(
    *,
    record: Record,
    ask: UUID,
    reason: str,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Decline a request; the reason is what the asker reads."""
    reason = checked_text(reason, "reason", most=1000)
    fact = RequestDeclined(ask=ask, reason=reason)
    _say(record, ask, fact, by, at, key, open_only=True)


def talk_over(
    *,
    record: Record,
    ask: UUID,
    words: str,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Ask back or answer; both sides read it on the request's page."""
    words = checked_text(words, "words", most=2000)
    _say(record, ask, RequestTalkedOver(ask=ask, words=words), by, at, key)


def answer_cost(
    *,
    record: Record,
    ask: UUID,
    accepted: bool,
    words: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Accept the cost of a request before the work, or dispute it with a word."""
    words = checked_text(words, "reason", most=1000, required=not accepted)
    fact = CostAnswered(ask=ask, accepted=accepted, words=words)
    _say(record, ask, fact, by, at, key)


def withdraw_request(
    *,
    record: Record,
    ask: UUID,
    reason: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Take a request back, as long as it is open."""
    reason = checked_text(reason, "reason", most=1000, required=False)
    fact = RequestWithdrawn(ask=ask, reason=reason)
    _say(record, ask, fact, by, at, key, open_only=True)


def close_request(
    *,
    record: Record,
    ask: UUID,
    listed: Sequence[UUID] = (),
    handover: UUID | None = None,
    words: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Close a request with the stakes it brought, or with why it brought none."""
    words = checked_text(words, "words", most=2000, required=False)
    if not listed and not words:
        raise Refused(
            "The request closes without stakes and without a word.",
            do="Say why it brought none.",
            field="words",
        )
    fact = RequestClosed(ask=ask, listed=tuple(listed), handover=handover, words=words)
    _say(record, ask, fact, by, at, key, open_only=True)


def _say(
    record: Record,
    ask: UUID,
    fact: Fact,
    by: By,
    at: datetime | None,
    key: UUID | None,
    *,
    open_only: bool = False,
) -> None:
    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            request = Request.objects.filter(record=record, key=ask).first()
            if request is None:
                raise Refused(
                    "There is no such request on this job.", code="no request"
                )
            if open_only and request.state not in OPEN:
                raise Refused(
                    f"The request is {request.state} already.",
                    do="Make a new request if something is still needed.",
                    code="not open",
                )
            said = Said(fact=fact, at=at, known=Known.DECIDED, key=key or uuid.uuid4())
            return append(locked, said, by=by, act=act)

    asked = {"kind": fact.KIND, "facts": facts_as_data(fact), "at": at}
    keyed(record, key, asked, do)
