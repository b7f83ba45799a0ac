"""Handovers: give stakes to a company on site, and answer for having received them."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from jobs.actions.checked import checked_text
from jobs.actions.keyed import keyed
from jobs.actions.requests import OPEN, close_request
from jobs.kinds.handovers import HandedOver, HandoverAnswered
from jobs.kinds.visits import Signature
from jobs.models import Company, Handover, Request, Visit
from jobs.queries.readiness import lacking
from stakes.models import Entry, Mark, Record
from stakes.record import By, Known, Refused, Said, append, held
from stakes.record.kinds import facts_as_data


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
    key: UUID | None = None,
) -> UUID:
    """Give stakes to a company: signed, declined with a word, or absent.

    What handover should wait for is a gate: it stops here and says what is lacking.
    `in_spite` records one that took place all the same, with what was lacking named.
    A request it answers is closed with it. The same `key` sent twice is one handover.
    """
    said = {
        "company": str(company.pk),
        "listed": tuple(dict.fromkeys(listed)),
        "signature": signature,
        "to_whom": checked_text(
            to_whom, "name", most=120, required=signature != "absent"
        ),
        "words": checked_text(
            words, "reason", most=1000, required=signature == "declined"
        ),
        "left_with": checked_text(left_with, "left_with", most=120, required=False),
        "explained": tuple(explained),
        "ask": ask,
        "visit": visit,
    }
    handover = key or uuid.uuid4()

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            marks = _given(locked, listed)
            _refuse_elsewhere(locked, company, ask, visit)
            missing = lacking(locked, listed)
            if missing and not in_spite:
                raise Refused(
                    "Not ready to hand over: " + "; ".join(missing) + ".",
                    do="Put that right first. If it was handed over already, "
                    "say so below.",
                    field="in_spite",
                    code="gate",
                )
            fact = HandedOver(
                handover=handover,
                company_name=company.name,
                sheets=tuple({UUID(s): None for m in marks for s in m.basis}),
                lacking=tuple(missing),
                **said,  # type: ignore[arg-type]
            )
            given = Said(fact=fact, at=at, key=key or uuid.uuid4())
            entries = append(locked, given, by=by, act=act)
            _close_asked(locked, ask, listed, handover, by, at)
            return entries

    keyed(record, key, {**said, "in_spite": in_spite, "at": at}, do)
    return handover


def _given(record: Record, listed: Sequence[UUID]) -> list[Mark]:
    marks = list(Mark.objects.filter(record=record, key__in=listed))
    if not listed or len(marks) != len(set(listed)):
        raise Refused(
            "No stakes are named that this job knows.",
            do="Name the stakes that are handed over.",
            field="listed",
        )
    return marks


def _refuse_elsewhere(
    record: Record, company: Company, ask: UUID | None, visit: UUID | None
) -> None:
    """The request and the visit are of this job, and the request of that company."""
    if visit and not Visit.objects.filter(record=record, key=visit).exists():
        raise Refused("There is no such visit on this job.", code="no visit")
    if ask is None:
        return
    request = Request.objects.filter(record=record, key=ask).first()
    if request is None:
        raise Refused("There is no such request on this job.", code="no request")
    if request.company != str(company.pk):
        raise Refused(
            f"{request.company_name} asked for these stakes.",
            where=f"You are handing them over to {company.name}.",
            do="Hand them to the company that asked, and name who received them; or "
            "hand them over without the request.",
            field="company",
            code="other company",
        )


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
    key: UUID | None = None,
) -> None:
    """Acknowledge stakes that were handed over, or decline them with a word."""
    words = checked_text(words, "reason", most=1000, required=not acknowledged)
    fact = HandoverAnswered(handover=handover, acknowledged=acknowledged, words=words)

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            row = Handover.objects.filter(record=record, key=handover).first()
            if row is None:
                raise Refused(
                    "There is no such handover on this job.", code="no handover"
                )
            if row.answer:
                raise Refused(
                    f"It was {row.answer} already.",
                    do="Write to the surveyor if something has changed.",
                    code="answered",
                )
            said = Said(fact=fact, at=at, known=Known.DECIDED, key=key or uuid.uuid4())
            return append(locked, said, by=by, act=act)

    keyed(record, key, {"facts": facts_as_data(fact), "at": at}, do)
