"""The row of a job: its name and place, and whether it is open."""

from __future__ import annotations

from jobs.kinds.opening import JobClosed, JobDescribed, JobOpened, JobReopened
from jobs.models import Job
from stakes.record import Counted
from stakes.record.folds import Columns, fold_of


@fold_of("job", model=Job)
def job(happened: list[Counted]) -> Columns | None:
    """A job exists from its opening entry on; the last description counts."""
    row: Columns = {}
    for said in happened:
        match said.fact:
            case JobOpened(name=name, place=place):
                row |= {"name": name, "place": place, "closed_at": None}
                row["opened_at"] = said.happened_at
            case JobDescribed(name=name, place=place):
                row |= {"name": name, "place": place}
            case JobClosed():
                row["closed_at"] = said.happened_at
            case JobReopened():
                row["closed_at"] = None
    return row if "opened_at" in row else None
