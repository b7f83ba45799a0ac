"""What every chapter needs: the people, the calendar, and short ways to say lengths."""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import datetime, timedelta
from uuid import UUID
from zoneinfo import ZoneInfo

from django.utils import timezone

from geometry.units import Length, Unit
from jobs.models import Company, User
from stakes.models import Mark, Record
from stakes.queries.state import job_state
from stakes.record import By
from stakes.record.lengths import Measured

ZONE = "America/Chicago"
WEEKS = 8
PASSWORD = "lath-and-hub-2026"


@dataclass
class Cast:
    """Who takes part, by role."""

    firm: Company
    builder: Company
    masons: Company
    earthworks: Company
    owner: Company
    satellite: Company
    people: dict[str, User] = field(default_factory=dict)

    def by(self, role: str) -> By:
        user = self.people[role]
        return By(person=str(user.pk), name=user.name)


@dataclass
class Story:
    """One job being told: its record, the cast, and the first Monday."""

    record: Record
    cast: Cast
    monday: datetime

    def at(self, day: int, clock: str) -> datetime:
        """A time of day on a day of the story; day 0 is the first Monday."""
        hour, minute = map(int, clock.split(":"))
        return self.monday + timedelta(days=day, hours=hour, minutes=minute)

    def mark(self, label: str) -> UUID:
        return Mark.objects.get(record=self.record, label=label).key

    def marks(self, *labels: str) -> list[UUID]:
        return [self.mark(label) for label in labels]

    def long(self, text: str) -> Measured:
        return Measured.of(Length.parse(text, self.record.length_unit))

    def off(self, metres: float, digits: int = 3) -> Measured:
        unit = self.record.length_unit
        return Measured.of(Length.from_metres(metres, unit, digits))

    def between(self, one: str, other: str, error: str = "0") -> Measured:
        """What a distance reads between two marks, with an error in the job's unit."""
        state = job_state(self.record)
        a, b = state.by_label[one].plan, state.by_label[other].plan
        de = float(b.easting_m or 0) - float(a.easting_m or 0)
        dn = float(b.northing_m or 0) - float(a.northing_m or 0)
        wrong = Length.parse(error, self.record.length_unit).metres
        return self.off((de * de + dn * dn) ** 0.5 + wrong, 2)


def first_monday() -> datetime:
    """The Monday eight weeks before this one, at midnight on the site."""
    today = timezone.now().astimezone(ZoneInfo(ZONE))
    monday = today - timedelta(days=today.weekday(), weeks=WEEKS)
    return monday.replace(hour=0, minute=0, second=0, microsecond=0)


FOOT, METRE = Unit.FOOT, Unit.METRE
