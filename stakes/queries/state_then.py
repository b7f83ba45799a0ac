"""The job as it stood when something happened, for facts that are told late."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from datetime import datetime
from uuid import UUID

from stakes.models import Record
from stakes.queries.state import JobState, job_state


def state_then(
    record: Record, at: datetime | None, marks: Iterable[UUID] = ()
) -> JobState:
    """What stood at `at` (None: now), with those of `marks` that were recorded later.

    Paper is often keyed in before the plan it belongs to: a mark that the record only
    learnt of afterwards is taken as it stands now, and the fact is not refused.
    """
    then = job_state(record, at=at)
    if at is None or set(marks) <= then.marks.keys():
        return then
    now = job_state(record)
    together = {**now.marks, **then.marks}
    return replace(
        then,
        marks=together,
        by_label={view.label: view for view in together.values()},
    )
