"""Holds: ask that nothing be built from marks until re-checked; hear, narrow, lift.

The same `key` sent twice is one act, everywhere here.
"""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from typing import Literal
from uuid import UUID

from jobs.actions.checked import checked_text, refuse_unknown_marks
from jobs.actions.keyed import keyed
from jobs.kinds.holds import HoldHeard, HoldLifted, HoldSent
from jobs.models import Hold
from jobs.queries.holders import holders
from stakes.models import Entry, Record
from stakes.record import By, Known, Refused, Said, append, held

NEUTRAL_WORDS = "Please do not build from these stakes until they have been re-checked."
How = Literal["told", "read", "acknowledged"]


def send_hold(
    *,
    record: Record,
    listed: Sequence[UUID],
    reason: str,
    words: str = NEUTRAL_WORDS,
    sent_by_rule: bool = False,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> UUID:
    """Send a hold to every company that was given these stakes."""
    if not listed:
        raise Refused(
            "The hold names no marks.", do="Name the marks it covers.", field="listed"
        )
    said = {
        "listed": tuple(dict.fromkeys(listed)),
        "words": checked_text(words, "words", most=1000),
        "reason": checked_text(reason, "reason", most=1000),
        "sent_by_rule": sent_by_rule,
    }
    hold = key or uuid.uuid4()

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            refuse_unknown_marks(locked, listed)
            companies = tuple(str(c.company) for c in holders(locked, listed))
            fact = HoldSent(hold=hold, to_companies=companies, **said)  # type: ignore[arg-type]
            sent = Said(fact=fact, at=at, known=Known.DECIDED, key=key or uuid.uuid4())
            return append(locked, sent, by=by, act=act)

    keyed(record, key, {**said, "at": at}, do)
    return hold


def lift_hold(
    *,
    record: Record,
    hold: UUID,
    listed: Sequence[UUID],
    reason: str,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Lift a hold for some of its marks or all; lifting is told like sending."""
    reason = checked_text(reason, "reason", most=1000)

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            row = _hold(locked, hold)
            lifted = [mark for mark in listed if str(mark) in row.in_force]
            if not lifted:
                raise Refused(
                    "None of these marks is under this hold.",
                    do="Name marks it still covers.",
                    field="listed",
                )
            fact = HoldLifted(hold=hold, listed=tuple(lifted), reason=reason)
            said = Said(fact=fact, at=at, known=Known.DECIDED, key=key or uuid.uuid4())
            return append(locked, said, by=by, act=act)

    asked = {"lift": hold, "listed": tuple(listed), "reason": reason, "at": at}
    keyed(record, key, asked, do)


def hear_hold(
    *,
    record: Record,
    hold: UUID,
    how: How,
    company: str = "",
    company_name: str = "",
    by_whom: str = "",
    words: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """Somebody was told of a hold, read it, or acknowledged it.

    A company acknowledges once and one person reads once; each telling is one more.
    """
    said = {
        "how": how,
        "company": company,
        "company_name": company_name,
        "by_whom": checked_text(by_whom, "name", most=120, required=False),
        "words": checked_text(words, "words", most=500, required=False),
    }

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            row = _hold(locked, hold)
            if has_heard(row, how, company, said["by_whom"] or by.name):
                return []
            fact = HoldHeard(hold=hold, **said)  # type: ignore[arg-type]
            heard = Said(fact=fact, at=at, known=Known.TOLD, key=key or uuid.uuid4())
            return append(locked, heard, by=by, act=act)

    keyed(record, key, {**said, "hold": hold, "at": at}, do)


def has_heard(hold: Hold, how: How, company: str, whom: str) -> bool:
    """Whether saying it again would add nothing."""
    if how == "told":
        return False
    return any(
        heard["how"] == how
        and heard["company"] == company
        and (how == "acknowledged" or heard["by"] == whom)
        for heard in hold.heard
    )


def _hold(record: Record, hold: UUID) -> Hold:
    row = Hold.objects.filter(record=record, key=hold).first()
    if row is None:
        raise Refused("There is no such hold on this job.", code="no hold")
    return row
