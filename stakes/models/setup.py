"""Setups as they stand now; rebuilt from the record at will."""

from __future__ import annotations

from django.db import models

from stakes.models.record import Record


class Setup(models.Model):
    """A means of measuring made ready, with the marks and values it leaned on."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT)
    sort = models.CharField(max_length=30)
    opened_by = models.CharField(max_length=200)
    person = models.CharField(max_length=64)
    instrument = models.CharField(max_length=120, blank=True)
    serial = models.CharField(max_length=60, blank=True)
    occasion = models.UUIDField(null=True)
    number = models.BigIntegerField()
    bears_on = models.JSONField(default=list)
    opened_at = models.DateTimeField(null=True)
    closed_at = models.DateTimeField(null=True)
    opening = models.CharField(max_length=12, blank=True)
    closing = models.CharField(max_length=12, blank=True)
    passed_at = models.DateTimeField(null=True)
    doubt_from = models.DateTimeField(null=True)
    reason = models.CharField(max_length=200, blank=True)

    def __str__(self) -> str:
        return f"{self.sort} {self.opened_at}"
