"""Holds: ask that nothing be built from marks until re-checked; hear, narrow, lift."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from typing import Literal
from uuid import UUID

from jobs.actions.checked import checked_text
from jobs.kinds.holds import HoldHeard, HoldLifted, HoldSent
from jobs.models import Hold
from jobs.queries.holders import holders
from stakes.models import Record
from stakes.record import By, Known, Refused, append, held

NEUTRAL_WORDS = "Please do not build from these stakes until they have been re-checked."


def send_hold(
    *,
    record: Record,
    listed: Sequence[UUID],
    reason: str,
    words: str = NEUTRAL_WORDS,
    sent_by_rule: bool = False,
    by: By,
    at: datetime | None = None,
) -> UUID:
    """Send a hold to every company that was given these stakes."""
    if not listed:
        raise Refused(
            "The hold names no marks.", do="Tick the marks it covers.", field="listed"
        )
    key = uuid.uuid4()
    with held(record) as locked:
        companies = holders(locked, listed)
        fact = HoldSent(
            hold=key,
            listed=tuple(listed),
            to_companies=tuple(str(c.company) for c in companies),
            words=checked_text(words, "words", most=1000),
            reason=checked_text(reason, "reason", most=1000),
            sent_by_rule=sent_by_rule,
        )
        append(locked, fact, by=by, at=at, known=Known.DECIDED)
    return key


def lift_hold(
    *,
    record: Record,
    hold: UUID,
    listed: Sequence[UUID],
    reason: str,
    by: By,
    at: datetime | None = None,
) -> None:
    """Lift a hold for some of its marks or all; lifting is told like sending."""
    reason = checked_text(reason, "reason", most=1000)
    with held(record) as locked:
        row = _hold(locked, hold)
        lifted = [mark for mark in listed if str(mark) in row.in_force]
        if not lifted:
            raise Refused(
                "None of these marks is under this hold.",
                do="Tick marks it still covers.",
                field="listed",
            )
        fact = HoldLifted(hold=hold, listed=tuple(lifted), reason=reason)
        append(locked, fact, by=by, at=at, known=Known.DECIDED)


def hear_hold(
    *,
    record: Record,
    hold: UUID,
    how: Literal["told", "read", "acknowledged"],
    company: str = "",
    company_name: str = "",
    by_whom: str = "",
    words: str = "",
    by: By,
    at: datetime | None = None,
) -> None:
    """Somebody was told of a hold, read it, or acknowledged it."""
    with held(record) as locked:
        _hold(locked, hold)
        fact = HoldHeard(
            hold=hold,
            how=how,
            company=company,
            company_name=company_name,
            by_whom=by_whom.strip(),
            words=words.strip(),
        )
        append(locked, fact, by=by, at=at, known=Known.TOLD)


def _hold(record: Record, hold: UUID) -> Hold:
    row = Hold.objects.filter(record=record, key=hold).first()
    if row is None:
        raise Refused("There is no such hold on this job.", code="no hold")
    return row
