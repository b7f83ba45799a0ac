"""Who had which roles on a job, from when to when: folded from its record."""

from __future__ import annotations

from django.db import models

from jobs.models.people import Company, User
from stakes.models import Record


class Seat(models.Model):
    """One person's seat on one job. Several may stand beside each other.

    The links carry no constraint: the record names people by id, and a fold must be
    able to say whatever the record says.
    """

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="seats")
    person = models.ForeignKey(
        User, models.DO_NOTHING, db_constraint=False, related_name="seats"
    )
    name = models.CharField(max_length=120)
    company = models.ForeignKey(
        Company, models.DO_NOTHING, db_constraint=False, related_name="seats"
    )
    company_name = models.CharField(max_length=120)
    roles = models.JSONField()
    grants = models.JSONField(default=list)
    work = models.CharField(max_length=200, blank=True)
    since = models.DateTimeField()
    until = models.DateTimeField(null=True)

    class Meta:
        indexes = [
            # The door asks for one person's seats on one job at every request.
            models.Index(fields=["person", "record"], name="seat_person"),
        ]

    def __str__(self) -> str:
        return f"{self.name}: {', '.join(self.roles)}"
