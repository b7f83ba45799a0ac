"""What a phone sent and could not be admitted: it waits for the office, never dropped."""

from __future__ import annotations

from django.db import models

from jobs.models.people import User


class TrayItem(models.Model):
    """One statement as it was sent, who sent it, and why it waits."""

    key = models.UUIDField(unique=True)
    person = models.ForeignKey(User, models.PROTECT)
    job = models.CharField(max_length=40, blank=True)
    sent = models.JSONField()
    reason = models.TextField()
    received_at = models.DateTimeField(auto_now_add=True)
    settled_at = models.DateTimeField(null=True)
    settled_by = models.CharField(max_length=200, blank=True)
    outcome = models.TextField(blank=True)

    class Meta:
        ordering = ["received_at"]

    def __str__(self) -> str:
        return f"{self.job} {self.key}"
