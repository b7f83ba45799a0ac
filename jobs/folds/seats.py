"""The row of a seat: roles, and the time it stood."""

from __future__ import annotations

from jobs.kinds.seats import SeatEnded, SeatGiven
from jobs.models import Seat
from stakes.record import Counted
from stakes.record.folds import Columns, fold_of


@fold_of("seat", model=Seat)
def seat(happened: list[Counted]) -> Columns | None:
    """Ended seats stay: what was done is judged by the seat its person had then."""
    row: Columns = {}
    ends = []
    for said in happened:
        match said.fact:
            case SeatGiven() as given:
                row = _given(given, said)
                ends += [given.until] if given.until else []
            case SeatEnded(until=until):
                ends.append(until or said.happened_at)
    if not row:
        return None
    return row | {"until": min(ends, default=None)}


def _given(given: SeatGiven, said: Counted) -> Columns:
    return {
        "person_id": given.person,
        "name": given.name,
        "company_id": given.company,
        "company_name": given.company_name,
        "roles": [str(role) for role in given.roles],
        "grants": [str(right) for right in given.grants],
        "work": given.work,
        "since": given.since or said.happened_at,
    }
