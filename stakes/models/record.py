"""The record: what happened, was decided or was said. `record.append` alone writes it.

Entry, EntryMark, EntryMatter and TreeNode only grow: triggers refuse anything else on
both engines (`stakes.record.triggers`). `Entry.body` holds the exact bytes that were
hashed; the other columns repeat parts of it so that the database can find and order.
"""

from __future__ import annotations

import uuid
from zoneinfo import ZoneInfo

from django.db import models

from geometry.units import Unit


class Record(models.Model):
    """One job's record, and the row every append locks."""

    key = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    number = models.CharField(max_length=40, unique=True)
    unit = models.CharField(max_length=4)
    zone = models.CharField(max_length=64, default="UTC")
    head = models.BigIntegerField(default=0)
    head_recorded_at = models.DateTimeField(null=True)
    peaks = models.JSONField(default=list)

    def __str__(self) -> str:
        return self.number

    @property
    def length_unit(self) -> Unit:
        return Unit(self.unit)

    @property
    def time_zone(self) -> ZoneInfo:
        return ZoneInfo(self.zone)


class Entry(models.Model):
    """One statement. `number` is gapless within its record."""

    record = models.ForeignKey(Record, models.PROTECT, related_name="entries")
    number = models.BigIntegerField()
    kind = models.CharField(max_length=60)
    key = models.UUIDField()
    act = models.UUIDField()
    happened_at = models.DateTimeField()
    recorded_at = models.DateTimeField()
    counter = models.BigIntegerField(default=0)
    place = models.BigIntegerField()
    person = models.CharField(max_length=64)
    name = models.CharField(max_length=200)
    device = models.CharField(max_length=64, blank=True)
    known = models.CharField(max_length=24)
    corrects = models.BigIntegerField(null=True)
    withdraws = models.BooleanField(default=False)
    body = models.TextField()
    said = models.CharField(max_length=64)
    leaf = models.CharField(max_length=64)

    class Meta:
        constraints = [
            # The backstop against a fork: of two racers without the lock one fails.
            models.UniqueConstraint(fields=["record", "number"], name="entry_number"),
            models.UniqueConstraint(fields=["record", "key"], name="entry_key"),
        ]
        indexes = [
            # Filters of the record page.
            models.Index(fields=["record", "kind", "number"], name="entry_kind"),
            models.Index(fields=["record", "person", "number"], name="entry_person"),
            # The few corrections of a record, read by every fold.
            models.Index(
                fields=["record", "number"],
                condition=models.Q(corrects__isnull=False),
                name="entry_corrections",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.number} {self.kind}"


class EntryMark(models.Model):
    """One mark an entry concerns; `running` and `previous` chain the mark's own list."""

    record = models.ForeignKey(Record, models.PROTECT)
    number = models.BigIntegerField()
    mark = models.UUIDField()
    role = models.CharField(max_length=120)
    effect = models.CharField(max_length=300, blank=True)
    running = models.BigIntegerField()
    previous = models.CharField(max_length=64)
    link = models.CharField(max_length=64)
    happened_at = models.DateTimeField()
    counter = models.BigIntegerField(default=0)
    place = models.BigIntegerField()

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["record", "mark", "running"], name="entrymark_running"
            )
        ]
        indexes = [
            # The as-of fold of a whole record reads these in order.
            models.Index(fields=["record", "number"], name="entrymark_number"),
        ]

    def __str__(self) -> str:
        return f"{self.number} {self.role}"


class EntryMatter(models.Model):
    """One other thing an entry concerns: setup, sheet, visit, request, handover ..."""

    record = models.ForeignKey(Record, models.PROTECT)
    number = models.BigIntegerField()
    thing = models.CharField(max_length=24)
    key = models.UUIDField()
    effect = models.CharField(max_length=200, blank=True)
    happened_at = models.DateTimeField()
    counter = models.BigIntegerField(default=0)
    place = models.BigIntegerField()

    class Meta:
        indexes = [
            models.Index(fields=["record", "thing", "key"], name="entrymatter_thing"),
            models.Index(fields=["record", "number"], name="entrymatter_number"),
        ]

    def __str__(self) -> str:
        return f"{self.number} {self.thing}"


class TreeNode(models.Model):
    """The root of every full run of 256 leaves, so that proofs need no full read."""

    record = models.ForeignKey(Record, models.PROTECT)
    run = models.BigIntegerField()
    hash = models.CharField(max_length=64)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["record", "run"], name="treenode_run")
        ]

    def __str__(self) -> str:
        return f"{self.run}"


class PrivatePart(models.Model):
    """What an entry said outside its hashed body: remarks, contacts, prices, photos.

    The body holds the salted hash, so a part can be withheld or erased and everything
    else still proves. Not guarded by triggers: an entry that says who and why erases.
    """

    record = models.ForeignKey(Record, models.PROTECT)
    number = models.BigIntegerField()
    name = models.CharField(max_length=40)
    salt = models.CharField(max_length=32)
    text = models.TextField(null=True)  # noqa: DJ001  null is "erased", "" is "empty"
    hash = models.CharField(max_length=64)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["record", "number", "name"], name="privatepart_name"
            )
        ]

    def __str__(self) -> str:
        return f"{self.number} {self.name}"
