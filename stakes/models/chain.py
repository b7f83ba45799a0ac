"""Where each mark's own list of entries ends: the next link is chained to it."""

from __future__ import annotations

from django.db import models

from stakes.models.record import Record


class MarkChain(models.Model):
    """The last link of one mark; moves with every entry that names the mark."""

    record = models.ForeignKey(Record, models.PROTECT)
    mark = models.UUIDField()
    running = models.BigIntegerField()
    link = models.CharField(max_length=64)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["record", "mark"], name="markchain_mark")
        ]

    def __str__(self) -> str:
        return f"{self.mark} {self.running}"
