"""How people and programs get in: tokens, and every attempt to sign in."""

from __future__ import annotations

import uuid

from django.db import models

from jobs.models.people import User


class Token(models.Model):
    """A program's way in for one person. Only the hash is kept; it can be revoked."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    person = models.ForeignKey(User, models.PROTECT, related_name="tokens")
    name = models.CharField(max_length=60)
    sha256 = models.CharField(max_length=64, unique=True)
    made_at = models.DateTimeField(auto_now_add=True)
    used_on = models.DateField(null=True)
    revoked_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ["-made_at"]

    def __str__(self) -> str:
        return self.name


class Outcome(models.TextChoices):
    WRONG = "wrong", "Wrong e-mail or password"
    TOO_MANY = "too many", "Refused: too many attempts"
    SIGNED_IN = "signed in", "Signed in"


class SignInAttempt(models.Model):
    """One attempt to sign in. Outside every record: it says nothing about a job."""

    email = models.CharField(max_length=254)
    address = models.CharField(max_length=45)
    at = models.DateTimeField()
    outcome = models.CharField(max_length=12, choices=Outcome)

    class Meta:
        ordering = ["-at"]
        indexes = [
            # The throttle counts the last minutes of one account and of one address.
            models.Index(fields=["email", "at"], name="signin_email"),
            models.Index(fields=["address", "at"], name="signin_address"),
        ]

    def __str__(self) -> str:
        return f"{self.email} {self.outcome}"
