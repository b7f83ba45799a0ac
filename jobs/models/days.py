"""Visits, requests, handovers and holds as they stand now; rebuilt at will."""

from __future__ import annotations

from django.db import models

from stakes.models import Record


class Visit(models.Model):
    """A crew on a site for a time, with an outcome for each task."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="visits")
    crew = models.CharField(max_length=120, blank=True)
    members = models.JSONField(default=list)
    tasks = models.JSONField(default=list)
    words = models.TextField(blank=True)
    starts_at = models.DateTimeField()
    ends_at = models.DateTimeField(null=True)
    arrived_at = models.DateTimeField(null=True)
    left_at = models.DateTimeField(null=True)
    cancelled = models.TextField(blank=True)
    weather = models.CharField(max_length=200, blank=True)
    standby_minutes = models.IntegerField(default=0)
    ticket = models.CharField(max_length=12, blank=True)
    ticket_by = models.CharField(max_length=200, blank=True)

    class Meta:
        indexes = [models.Index(fields=["record", "starts_at"], name="visit_starts")]

    def __str__(self) -> str:
        return f"{self.crew} {self.starts_at:%Y-%m-%d}"


class Request(models.Model):
    """What a contractor asked for, and how far it has come."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="requests")
    sort = models.CharField(max_length=12)
    company = models.CharField(max_length=36)
    company_name = models.CharField(max_length=120)
    asked_by = models.CharField(max_length=200)
    asked_by_id = models.CharField(max_length=64)
    listed = models.JSONField(default=list)
    words = models.TextField(blank=True)
    received_at = models.DateTimeField()
    needed_by = models.DateTimeField(null=True)
    earliest = models.DateTimeField(null=True)
    built_from = models.TextField(blank=True)
    state = models.CharField(max_length=12)
    promised_for = models.DateTimeField(null=True)
    visit = models.UUIDField(null=True)
    payer = models.CharField(max_length=120, blank=True)
    cost = models.CharField(max_length=12, blank=True)
    reason = models.TextField(blank=True)
    closed_at = models.DateTimeField(null=True)
    number = models.BigIntegerField()

    class Meta:
        indexes = [models.Index(fields=["record", "state"], name="request_state")]

    def __str__(self) -> str:
        return f"{self.sort} {self.received_at:%Y-%m-%d}"


class Handover(models.Model):
    """Stakes given to a company, with what was answered."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="handovers")
    listed = models.JSONField(default=list)
    company = models.CharField(max_length=36)
    company_name = models.CharField(max_length=120)
    to_whom = models.CharField(max_length=120, blank=True)
    signature = models.CharField(max_length=12)
    words = models.TextField(blank=True)
    left_with = models.CharField(max_length=120, blank=True)
    lacking = models.JSONField(default=list)
    ask = models.UUIDField(null=True)
    visit = models.UUIDField(null=True)
    given_at = models.DateTimeField()
    given_by = models.CharField(max_length=200)
    answered_at = models.DateTimeField(null=True)
    answer = models.CharField(max_length=12, blank=True)
    answer_words = models.TextField(blank=True)

    def __str__(self) -> str:
        return f"{self.company_name} {self.given_at:%Y-%m-%d}"


class Hold(models.Model):
    """Do not build from these until re-checked."""

    key = models.UUIDField(primary_key=True)
    record = models.ForeignKey(Record, models.PROTECT, related_name="holds")
    listed = models.JSONField(default=list)
    in_force = models.JSONField(default=list)
    companies = models.JSONField(default=list)
    words = models.TextField(blank=True)
    reason = models.TextField(blank=True)
    sent_at = models.DateTimeField()
    sent_by = models.CharField(max_length=200)
    lifted_at = models.DateTimeField(null=True)
    heard = models.JSONField(default=list)

    def __str__(self) -> str:
        return f"hold {self.sent_at:%Y-%m-%d}"
