"""Letters to be sent: one for each matter and reader, kept after sending."""

from __future__ import annotations

from django.db import models

from stakes.models import Record


class Notice(models.Model):
    """One letter. Its key names entry and reader, so a matter is never told twice."""

    key = models.CharField(max_length=140, unique=True)
    record = models.ForeignKey(Record, models.PROTECT)
    number = models.BigIntegerField()
    to = models.EmailField()
    subject = models.CharField(max_length=200)
    body = models.TextField()
    made_at = models.DateTimeField(auto_now_add=True)
    sent_at = models.DateTimeField(null=True)

    def __str__(self) -> str:
        return f"{self.to}: {self.subject}"
