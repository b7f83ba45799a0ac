"""Handovers: give stakes to a company on site, and answer for having received them."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from jobs.actions.checked import checked_text
from jobs.actions.requests import OPEN, close_request
from jobs.kinds.handovers import HandedOver, HandoverAnswered
from jobs.kinds.visits import Signature
from jobs.models import Company, Handover, Request
from jobs.queries.readiness import lacking
from stakes.models import Mark, Record
from stakes.record import By, Known, Refused, append, held


def hand_over(
    *,
    record: Record,
    company: Company,
    listed: Sequence[UUID],
    signature: Signature,
    to_whom: str = "",
    words: str = "",
    left_with: str = "",
    explained: Sequence[str] = (),
    ask: UUID | None = None,
    visit: UUID | None = None,
    in_spite: bool = False,
    by: By,
    at: datetime | None = None,
) -> UUID:
    """Give stakes to a company: signed, declined with a word, or absent.

    What handover should wait for is a gate: it stops here and says what is lacking.
    `in_spite` records one that took place all the same, with what was lacking named.
    A request it answers is closed with it.
    """
    if signature != "absent":
        to_whom = checked_text(to_whom, "name", most=120)
    if signature == "declined":
        words = checked_text(words, "reason", most=1000)
    with held(record) as locked:
        marks = list(Mark.objects.filter(record=record, key__in=listed))
        if not listed or len(marks) != len(set(listed)):
            raise Refused(
                "No stakes are named that this job knows.",
                do="Tick the stakes that are handed over.",
                field="listed",
            )
        missing = lacking(locked, listed)
        if missing and not in_spite:
            raise Refused(
                "Not ready to hand over: " + "; ".join(missing) + ".",
                do="Put that right first. If it was handed over already, say so below.",
                field="in_spite",
                code="gate",
            )
        key = uuid.uuid4()
        fact = HandedOver(
            handover=key,
            listed=tuple(listed),
            company=str(company.pk),
            company_name=company.name,
            to_whom=to_whom.strip(),
            signature=signature,
            words=words.strip(),
            left_with=left_with.strip(),
            sheets=tuple({UUID(s): None for m in marks for s in m.basis}),
            explained=tuple(explained),
            lacking=tuple(missing),
            ask=ask,
            visit=visit,
        )
        append(locked, fact, by=by, at=at)
        _close_asked(locked, ask, listed, key, by, at)
    return key


def _close_asked(
    record: Record,
    ask: UUID | None,
    listed: Sequence[UUID],
    handover: UUID,
    by: By,
    at: datetime | None,
) -> None:
    """A request whose marks are all among those handed over has been answered."""
    request = Request.objects.filter(record=record, key=ask).first() if ask else None
    if request is None or request.state not in OPEN:
        return
    if set(request.listed) <= {str(mark) for mark in listed}:
        close_request(
            record=record,
            ask=request.key,
            listed=listed,
            handover=handover,
            by=by,
            at=at,
        )


def answer_handover(
    *,
    record: Record,
    handover: UUID,
    acknowledged: bool,
    words: str = "",
    by: By,
    at: datetime | None = None,
) -> None:
    """Acknowledge stakes that were handed over, or decline them with a word."""
    words = checked_text(words, "reason", most=1000, required=not acknowledged)
    with held(record) as locked:
        row = Handover.objects.filter(record=record, key=handover).first()
        if row is None:
            raise Refused("There is no such handover on this job.", code="no handover")
        if row.answer:
            raise Refused(
                f"It was {row.answer} already.",
                do="Write to the surveyor if something has changed.",
                code="answered",
            )
        fact = HandoverAnswered(
            handover=handover, acknowledged=acknowledged, words=words
        )
        append(locked, fact, by=by, at=at, known=Known.DECIDED)
