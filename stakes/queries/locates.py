"""Utility locates and hazards of a job, as far as the record says."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from shapely import Point, Polygon

from stakes.kinds.cautions import CautionRead, HazardFlagged, LocateRecorded
from stakes.models import Mark, Record, Zone
from stakes.record import reading


@dataclass(frozen=True, slots=True)
class Ticket:
    """A locate ticket as it stands, with who recorded it and the polygon it covers."""

    fact: LocateRecorded
    recorded_by: str
    corners_m: tuple[tuple[float, float], ...] = ()

    def covers(self, mark: Mark) -> bool:
        """Whether the mark lies in its polygon; without one it covers the whole job."""
        if self.fact.zone is None:
            return True
        if len(self.corners_m) < 3 or mark.easting_m is None or mark.northing_m is None:
            return False
        return bool(
            Polygon(self.corners_m).covers(Point(mark.easting_m, mark.northing_m))
        )

    def lacks(self, at: datetime) -> str:
        """Why the ground may not be broken under it at this moment; empty: nothing."""
        fact = self.fact
        if at < fact.valid_from:
            return "it is not valid yet"
        if at > fact.valid_to:
            return "it has expired"
        if not fact.owners:
            return "no owner's answer is recorded"
        silent = [o.owner for o in fact.owners if o.answer == "no answer yet"]
        if silent:
            return f"{', '.join(silent)} did not answer yet"
        odd = [o.owner for o in fact.owners if o.answer == "conflict"]
        if odd:
            return f"{', '.join(odd)} answered that there is a conflict"
        return ""


def tickets(record: Record, at: datetime | None = None) -> list[Ticket]:
    """Every locate ticket of a job, each as last recorded by `at` (None: now)."""
    said = reading.entries(record, kinds=[LocateRecorded.KIND], at=at)
    latest = {c.fact.ticket: c for c in said}  # type: ignore[attr-defined]
    zones = Zone.objects.filter(record=record).in_bulk(
        [c.fact.zone for c in latest.values() if c.fact.zone]  # type: ignore[attr-defined]
    )
    found = []
    for counted in latest.values():
        fact = counted.fact
        assert isinstance(fact, LocateRecorded)
        corners = zones[fact.zone].corners_m if fact.zone in zones else ()
        found.append(Ticket(fact, counted.name, tuple((e, n) for e, n in corners)))
    return sorted(found, key=lambda t: t.fact.valid_to, reverse=True)


def valid_ticket(
    listed: Iterable[Ticket], mark: Mark, at: datetime
) -> tuple[Ticket | None, str]:
    """The ticket under which this mark's ground may be broken; else why there is none."""
    why = "no locate ticket is recorded"
    for ticket in listed:
        lacks = ticket.lacks(at)
        if not ticket.covers(mark):
            lacks = "it does not cover this mark"
        if not lacks:
            return ticket, ""
        why = f"ticket {ticket.fact.number}: {lacks}"
    return None, why


def hazards(record: Record, at: datetime | None = None) -> list[HazardFlagged]:
    """What was flagged on the site and is still there."""
    said = reading.entries(record, kinds=[HazardFlagged.KIND], at=at)
    latest = {c.fact.hazard: c.fact for c in said}  # type: ignore[attr-defined]
    return [f for f in latest.values() if isinstance(f, HazardFlagged) and not f.gone]


def acknowledged(
    record: Record, person: str, at: datetime, occasion: UUID | None
) -> set[tuple[str, str]]:
    """The cautions this person said they had read that day, or on that visit."""
    day = at.astimezone(record.time_zone).date()
    found = set()
    for counted in reading.entries(record, kinds=[CautionRead.KIND]):
        fact = counted.fact
        assert isinstance(fact, CautionRead)
        if counted.person != person:
            continue
        same_day = counted.happened_at.astimezone(record.time_zone).date() == day
        if same_day or (occasion is not None and fact.occasion == occasion):
            found.add((fact.sort, fact.words))
    return found
