"""Marks and their stakes as they stand now; rebuilt from the record at will."""

from __future__ import annotations

from django.db import models

from stakes.models.record import Record


class Mark(models.Model):
    """A planned place with a purpose: control, benchmark, stake position, foreign mark.

    Coordinates are exact nanometres as text beside floats for computing.
    """

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="marks")
    label = models.CharField(max_length=60)
    purpose = models.CharField(max_length=12)
    sort = models.CharField(max_length=40, blank=True)
    stage = models.CharField(max_length=40, blank=True)
    carries = models.CharField(max_length=10)
    line = models.CharField(max_length=80, blank=True)
    words = models.CharField(max_length=200, blank=True)
    refers_to = models.CharField(max_length=80, blank=True)
    tolerance = models.CharField(max_length=60, blank=True)
    lasts = models.CharField(max_length=40, blank=True)
    basis = models.JSONField(default=list)
    northing_nm = models.CharField(max_length=24, blank=True)
    easting_nm = models.CharField(max_length=24, blank=True)
    elevation_nm = models.CharField(max_length=24, blank=True)
    northing_m = models.FloatField(null=True)
    easting_m = models.FloatField(null=True)
    elevation_m = models.FloatField(null=True)
    planned_by = models.BigIntegerField(null=True)
    value = models.UUIDField(null=True)
    covariance_mm2 = models.JSONField(null=True)
    standing = models.CharField(max_length=10)
    held = models.BooleanField(default=False)
    doubled = models.BooleanField(default=False)
    stakes_set = models.IntegerField(default=0)
    last_entry = models.BigIntegerField(default=0)

    class Meta:
        indexes = [
            models.Index(fields=["record", "label"], name="mark_label"),
            models.Index(fields=["record", "standing"], name="mark_standing"),
        ]

    def __str__(self) -> str:
        return self.label

    @property
    def is_control(self) -> bool:
        return self.purpose in ("control", "benchmark")


class Stake(models.Model):
    """One physical stake of a mark, by the mark's own entries."""

    record = models.ForeignKey(Record, models.PROTECT)
    mark = models.UUIDField()
    ordinal = models.IntegerField()
    set_at = models.DateTimeField(null=True)
    set_number = models.BigIntegerField(null=True)
    setup = models.UUIDField(null=True)
    components = models.CharField(max_length=2)
    standing = models.CharField(max_length=10)
    how = models.CharField(max_length=80, blank=True)
    last_seen = models.DateTimeField(null=True)
    first_missing = models.DateTimeField(null=True)
    lath_down = models.BooleanField(default=False)
    held = models.BooleanField(default=False)
    provisional = models.BooleanField(default=False)
    superseded = models.BooleanField(default=False)
    handed_over = models.BooleanField(default=False)
    built_from = models.BooleanField(default=False)
    fate = models.CharField(max_length=20, blank=True)
    position = models.JSONField()
    elevation = models.JSONField()

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["record", "mark", "ordinal"], name="stake_ordinal"
            )
        ]

    def __str__(self) -> str:
        return f"{self.mark} stake {self.ordinal}"
