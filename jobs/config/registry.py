"""Where the packages meet: what `stakes` asks for and only `jobs` knows is handed down."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime

from jobs.notices import notify
from jobs.queries.between import without_others
from jobs.queries.terms import terms_at, today
from stakes.models import Record
from stakes.queries import history, tolerance
from stakes.record import folds


def hand_down() -> None:
    """Set every hook; called once when the program starts."""
    tolerance.SOURCE = tolerance_classes
    if notify not in folds.AFTER_APPEND:
        folds.AFTER_APPEND.append(notify)
    if without_others not in history.KEPT_FROM:
        history.KEPT_FROM.append(without_others)


def tolerance_classes(
    record: Record, at: datetime | None
) -> Sequence[tolerance.ToleranceClass]:
    """The tolerance classes of the terms in force on the day of `at`."""
    day = at.astimezone(record.time_zone).date() if at else today(record)
    return [
        tolerance.ToleranceClass(
            name=c.name,
            position=c.position,
            elevation=c.elevation,
            rule=c.rule,
            grade=c.grade,
            reaches=c.reaches,
            source=c.source,
            default=c.default,
        )
        for c in terms_at(record, day).classes
    ]
