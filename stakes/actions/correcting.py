"""Correcting the record: take an entry back, or say it again rightly. Never erase."""

from __future__ import annotations

from collections.abc import Collection
from datetime import datetime
from typing import Any

from stakes.can import Can
from stakes.kinds.correcting import Withdrawn
from stakes.models import Entry, Record
from stakes.record import By, Fact, Known, Refused, Said, append, held
from stakes.record.kinds import fact_from, facts_as_data
from stakes.record.reading import corrections, decoded

LEFT_TO_THEIR_OWN_PAGES = ("job opened", "seat given", "seat ended")
"""Kinds whose undoing is an act of its own, with rules of its own."""

CORRECTED_BY: dict[str, Can] = {
    "planned": Can.ISSUE,
    "layout issued": Can.ISSUE,
    "file read": Can.ISSUE,
    "superseded": Can.ISSUE,
    "retired": Can.PLAN,
    "zone drawn": Can.PLAN,
    "sheet received": Can.PLAN,
    "sheet read": Can.PLAN,
    "question asked": Can.PLAN,
    "question answered": Can.PLAN,
    "direction given": Can.PLAN,
    "direction settled": Can.PLAN,
    "value adopted": Can.ADOPT,
    "trust answered": Can.ADOPT,
    "gate accepted": Can.PASS_GATE,
}
"""Who may correct a kind: whoever may say it. The rest are field facts (RECORD); the
kinds of `jobs` are added by `jobs`."""

OWN_WORDS: set[str] = set()
"""Kinds that are somebody's answer: nobody else puts other words into their mouth."""


def needed(kind: str) -> Can:
    """The right that correcting an entry of this kind takes."""
    return CORRECTED_BY.get(kind, Can.RECORD)


def may_correct(entry: Entry, by: By, rights: Collection[Can]) -> bool:
    """Whether a page should offer it at all."""
    if entry.kind in LEFT_TO_THEIR_OWN_PAGES or needed(entry.kind) not in rights:
        return False
    return entry.kind not in OWN_WORDS or entry.person == by.person


def withdraw(
    record: Record, number: int, *, why: str, by: By, rights: Collection[Can]
) -> Entry:
    """Take back what an entry said; it stays readable, and why stands beside it."""
    with held(record) as locked:
        target = _target(locked, number, rights, by)
        said = Said(
            fact=Withdrawn(),
            known=Known.DECIDED,
            corrects=target.key,
            withdraws=True,
            why=why.strip(),
        )
        return append(locked, said, by=by)[0]


def correct(
    record: Record,
    number: int,
    *,
    changes: dict[str, Any],
    why: str,
    by: By,
    rights: Collection[Can],
    at: datetime | None = None,
) -> Entry:
    """Say an entry again with some facts changed; all its facts are replaced.

    `changes` are plain data by fact name; `at` is the right time, None to keep it.
    """
    with held(record) as locked:
        target = _target(locked, number, rights, by)
        before = decoded(target, {}).fact
        after = fact_from(target.kind, {**_data(before), **changes})
        if after == before and at in (None, target.happened_at):
            raise Refused(
                "Nothing was changed.",
                do="Change a fact or the time, or go back.",
                code="no change",
            )
        said = Said(
            fact=after,
            at=at or target.happened_at,
            known=Known(target.known),
            corrects=target.key,
            counter=target.counter,
            why=why.strip(),
        )
        return append(locked, said, by=by)[0]


def _data(fact: Fact) -> dict[str, Any]:
    return facts_as_data(fact)


def _target(record: Record, number: int, rights: Collection[Can], by: By) -> Entry:
    target = Entry.objects.filter(record=record, number=number).first()
    if target is None:
        raise Refused(f"There is no entry {number} in this record.", code="no target")
    if target.kind in LEFT_TO_THEIR_OWN_PAGES:
        raise Refused(
            f"An entry of the kind {target.kind!r} is not corrected here.",
            do="Use the page it was made on.",
            code="other page",
        )
    if needed(target.kind) not in rights:
        raise Refused(
            f"Correcting {target.kind!r} takes the right to {needed(target.kind)}.",
            do="Ask somebody who has it.",
            code="not yours",
        )
    if target.kind in OWN_WORDS and target.person != by.person:
        raise Refused(
            f"What {target.name} answered is corrected by nobody else.",
            do="Record what you know of it as an entry of your own.",
            code="not yours",
        )
    newer = corrections(record).get(number)
    if newer is not None:
        raise Refused(
            f"Entry {number} no longer counts: entry {newer} took its place.",
            do=f"Correct entry {newer}.",
            code="already corrected",
        )
    return target
