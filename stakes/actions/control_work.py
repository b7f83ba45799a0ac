"""What all control work shares: its marks, its entry, its draft of new marks.

Everything is compared with the record. A disagreement stays a question; nothing is
averaged away, and no value changes before the surveyor adopts one.
"""

from __future__ import annotations

import uuid
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime

from geometry.units import Length, Unit
from stakes.actions.issuing import keep_draft
from stakes.actions.once import follows
from stakes.exchange.rows import Row
from stakes.kinds.control import ControlMeasured
from stakes.kinds.words import Verdict
from stakes.models import Draft, Entry, Mark, Record
from stakes.record import By, Fact, Known, Refused, Said
from stakes.record.lengths import Measured
from stakes.record.reading import decoded

MOST_ROWS = 300
FINE = 4


@dataclass(frozen=True, slots=True)
class Worked:
    """What control work came to: its entry, the comparison, and a draft of new marks."""

    entry: Entry
    fact: ControlMeasured
    draft: Draft | None = None


def said_of(fact: Fact, key: uuid.UUID, at: datetime | None) -> Said:
    return Said(fact=fact, at=at, known=Known.MEASURED, key=key)


def draft_of(
    record: Record, rows: Sequence[Row], sort: str, key: uuid.UUID, by: By
) -> Draft | None:
    """New marks wait as a draft, like any plan: to be checked and issued."""
    kept = Draft.objects.filter(key=follows(key, "draft")).first()
    if kept is not None or not rows:
        return kept
    return keep_draft(
        record=record,
        rows=rows,
        title=f"Control from a {sort}",
        sort="marks",
        source=f"{sort}, measured by {by.name}",
        by=by,
        key=follows(key, "draft"),
    )


def worked(entry: Entry, draft: Draft | None = None) -> Worked:
    fact = decoded(entry, {}).fact
    assert isinstance(fact, ControlMeasured)
    return Worked(entry, fact, draft)


def marks_found(record: Record, keys: Iterable[uuid.UUID]) -> dict[uuid.UUID, Mark]:
    wanted = set(keys)
    marks = {m.key: m for m in Mark.objects.filter(record=record, key__in=wanted)}
    if len(marks) != len(wanted):
        raise Refused("A mark named here is not on this job.", code="no mark")
    return marks


def by_label_of(record: Record, labels: Sequence[str]) -> dict[str, Mark]:
    if len(labels) > MOST_ROWS:
        raise Refused(f"At most {MOST_ROWS} rows at once.")
    rows = Mark.objects.filter(record=record, label__in=labels)
    return {m.label: m for m in rows}


def computed_length(metres: float, unit: Unit) -> Measured:
    return Measured.of(Length.from_metres(metres, unit, FINE))


def verdict_of(difference: Measured, limit: Measured | None) -> Verdict:
    if limit is None:
        return "not tested"
    return "pass" if abs(int(difference.nm)) <= int(limit.nm) else "fail"
