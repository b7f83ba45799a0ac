"""Sheets, questions, directions and zones as they stand now; rebuilt at will."""

from __future__ import annotations

from django.db import models

from stakes.models.record import Record


class Sheet(models.Model):
    """A drawing, file, sketch or written answer that marks are computed from."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT)
    sheet_number = models.CharField(max_length=60)
    revision = models.CharField(max_length=20)
    status = models.CharField(max_length=20)
    title = models.CharField(max_length=200, blank=True)
    from_whom = models.CharField(max_length=120, blank=True)
    received_on = models.CharField(max_length=10, blank=True)
    received_at = models.DateTimeField()
    replaces = models.UUIDField(null=True)
    replaced_by = models.UUIDField(null=True)
    file_sha256 = models.CharField(max_length=64, blank=True)
    what_changed = models.TextField(blank=True)
    touched = models.JSONField(default=list)
    touches_all = models.BooleanField(default=False)
    sorted = models.BooleanField(default=False)
    read_by = models.JSONField(default=list)

    def __str__(self) -> str:
        return f"{self.sheet_number} rev {self.revision}"


class Question(models.Model):
    """A conflict or missing dimension put to the designer."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT)
    words = models.TextField()
    to_whom = models.CharField(max_length=120)
    holds = models.JSONField(default=list)
    asked_at = models.DateTimeField()
    asked_by = models.CharField(max_length=200)
    answered_at = models.DateTimeField(null=True)
    answer = models.TextField(blank=True)
    answered_by = models.CharField(max_length=200, blank=True)
    in_writing = models.BooleanField(default=False)

    def __str__(self) -> str:
        return self.words


class Direction(models.Model):
    """A verbal change, held until confirmed in writing."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT)
    words = models.TextField()
    by_whom = models.CharField(max_length=120)
    to_whom = models.CharField(max_length=120)
    holds = models.JSONField(default=list)
    given_at = models.DateTimeField()
    settled_at = models.DateTimeField(null=True)
    confirmed = models.BooleanField(default=False)
    settlement = models.TextField(blank=True)

    def __str__(self) -> str:
        return self.words


class Zone(models.Model):
    """A polygon or line that matters, in floats for computing and drawing."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="zones")
    name = models.CharField(max_length=80)
    sort = models.CharField(max_length=30)
    corners_m = models.JSONField()
    closed = models.BooleanField(default=True)
    height_m = models.FloatField(null=True)
    words = models.CharField(max_length=200, blank=True)
    drawn_in = models.BigIntegerField()

    def __str__(self) -> str:
        return self.name


class Check(models.Model):
    """A check of stakes, as it is judged now."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT)
    sort = models.CharField(max_length=20)
    listed = models.JSONField(default=list)
    other = models.JSONField(default=list)
    setup = models.UUIDField(null=True)
    components = models.CharField(max_length=2)
    grade = models.IntegerField()
    reaches = models.JSONField(default=list)
    verdict = models.CharField(max_length=12)
    made_at = models.DateTimeField()
    made_by = models.CharField(max_length=200)
    number = models.BigIntegerField()

    def __str__(self) -> str:
        return f"{self.sort} {self.verdict}"
