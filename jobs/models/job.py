"""The job and the terms it runs under: both are folded from its record."""

from __future__ import annotations

from django.db import models

from stakes.models import Record


class Job(models.Model):
    """One construction site the firm lays out. Closed, never deleted.

    Refer to the Record, not to this row: it is made anew whenever the record is folded.
    """

    key = models.UUIDField(primary_key=True)
    record = models.OneToOneField(Record, models.PROTECT, related_name="job")
    name = models.CharField(max_length=120)
    place = models.CharField(max_length=200, blank=True)
    opened_at = models.DateTimeField()
    closed_at = models.DateTimeField(null=True)

    def __str__(self) -> str:
        return f"{self.record.number} {self.name}"

    @property
    def number(self) -> str:
        return self.record.number


class Term(models.Model):
    """One setting of one subject of the terms, in force from the day `effective`."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="terms")
    subject = models.CharField(max_length=24)
    company = models.CharField(max_length=36, blank=True)
    effective = models.DateField()
    set_at = models.DateTimeField()
    set_by = models.CharField(max_length=200)
    number = models.BigIntegerField()
    place = models.BigIntegerField()
    facts = models.JSONField()

    class Meta:
        indexes = [models.Index(fields=["record", "subject"], name="term_subject")]

    def __str__(self) -> str:
        return f"{self.subject} from {self.effective}"
