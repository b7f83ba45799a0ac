"""The first notice of a hold is part of the record: when which company was told."""

from __future__ import annotations

from uuid import UUID, uuid5

from jobs.actions.holds import hear_hold
from jobs.kinds.holds import HoldSent
from jobs.models import Notice, User
from stakes.models import Entry
from stakes.record import By
from stakes.record.reading import decoded

LETTERS = By(person="letters", name="Lathbook, by mail")


def first_notice(notice: Notice) -> None:
    """Record it once per hold and company, however many letters went out."""
    entry = Entry.objects.filter(record=notice.record, number=notice.number).first()
    if entry is None or entry.kind != HoldSent.KIND:
        return
    fact = decoded(entry, {}).fact
    reader = _reader(notice)
    if not isinstance(fact, HoldSent) or reader is None:
        return
    key = uuid5(fact.hold, f"first notice to {reader.company_id}")
    if Entry.objects.filter(record=notice.record, key=key).exists():
        return
    hear_hold(
        record=notice.record,
        hold=fact.hold,
        how="told",
        company=str(reader.company_id),
        company_name=reader.company.name,
        by_whom=reader.name,
        words="first notice, by mail",
        by=LETTERS,
        key=key,
    )


def _reader(notice: Notice) -> User | None:
    key = UUID(notice.key.rpartition(":")[2])
    return User.objects.filter(pk=key).select_related("company").first()
