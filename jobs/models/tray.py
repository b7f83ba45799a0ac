"""What a phone sent and could not be admitted: it waits for the office, never dropped."""

from __future__ import annotations

from django.db import models

from jobs.models.people import User


class TrayItem(models.Model):
    """One statement as it was sent, who sent it, and why it waits.

    `sent` is its JSON as text: whatever a device sends can be kept, also what no JSON
    column would hold. The clock's offset is that of the first sending, so that what is
    admitted later still happened when it happened.
    """

    key = models.UUIDField()
    person = models.ForeignKey(User, models.PROTECT)
    job = models.CharField(max_length=40, blank=True)
    sent = models.TextField()
    sha256 = models.CharField(max_length=64, default="")
    device = models.CharField(max_length=64, blank=True)
    clock_offset_ms = models.BigIntegerField(default=0)
    reason = models.TextField()
    received_at = models.DateTimeField(auto_now_add=True)
    settled_at = models.DateTimeField(null=True)
    settled_by = models.CharField(max_length=200, blank=True)
    outcome = models.TextField(blank=True)

    class Meta:
        ordering = ["received_at", "pk"]
        constraints = [
            # Sent again it is the same item; other words under its key are another.
            models.UniqueConstraint(
                fields=["person", "key", "sha256"], name="trayitem_words"
            )
        ]

    def __str__(self) -> str:
        return f"{self.job} {self.key}"
