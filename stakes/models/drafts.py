"""Drafts of a plan: mutable, outside the record, until the surveyor issues them."""

from __future__ import annotations

import uuid

from django.db import models

from stakes.models.record import Record


class Draft(models.Model):
    """Rows somebody computed, that another person checks and the surveyor issues.

    `rows` are `stakes.exchange.rows.Row` as plain data; `about` holds what else the
    draft was made with: the answers of an import, or the layout of a building.
    """

    COMPUTED, CHECKED, ISSUED, LEFT = "computed", "checked", "issued", "left"

    key = models.UUIDField(primary_key=True, default=uuid.uuid4)
    record = models.ForeignKey(Record, models.PROTECT, related_name="drafts")
    title = models.CharField(max_length=120)
    sort = models.CharField(max_length=12)
    source = models.CharField(max_length=200, blank=True)
    rows = models.JSONField(default=list)
    about = models.JSONField(default=dict)
    complaints = models.JSONField(default=list)
    state = models.CharField(max_length=10, default=COMPUTED)
    computed_person = models.CharField(max_length=64)
    computed_by = models.CharField(max_length=200)
    computed_at = models.DateTimeField(auto_now_add=True)
    checked_person = models.CharField(max_length=64, blank=True)
    checked_by = models.CharField(max_length=200, blank=True)
    checked_at = models.DateTimeField(null=True)
    checked_how = models.CharField(max_length=200, blank=True)
    checked_alone = models.BooleanField(default=False)
    issued_by = models.CharField(max_length=200, blank=True)
    issued_at = models.DateTimeField(null=True)
    first_entry = models.BigIntegerField(null=True)

    class Meta:
        indexes = [
            models.Index(fields=["record", "state"], name="draft_state"),
        ]

    def __str__(self) -> str:
        return f"{self.title} ({self.state})"

    @property
    def is_open(self) -> bool:
        return self.state in (self.COMPUTED, self.CHECKED)
