"""People, companies and crews. They stand outside every record and are never deleted.

A record copies names, so that what was said outlives the account that said it.
"""

from __future__ import annotations

import uuid

from django.contrib.auth.models import AbstractBaseUser, BaseUserManager
from django.db import models
from django.db.models.functions import Lower


class CompanyKind(models.TextChoices):
    FIRM = "firm", "Survey firm (ours)"
    GENERAL = "general contractor", "General contractor"
    TRADE = "trade", "Trade contractor"
    OWNER = "owner", "Owner, or for the owner"
    SUBCONTRACTED = "subcontracted crew", "Subcontracted survey crew"


class FirmRole(models.TextChoices):
    """What a person is in the firm, before any seat on a job."""

    MANAGER = "manager", "Manager"
    SURVEYOR = "surveyor", "Licensed surveyor"
    PRINCIPAL = "manager and surveyor", "Manager and licensed surveyor"
    CREW = "crew", "Crew"
    NONE = "none", "Not of the firm"


class Company(models.Model):
    """Whose people come to a job."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    name = models.CharField(max_length=120)
    kind = models.CharField(max_length=20, choices=CompanyKind)
    phone = models.CharField(max_length=40, blank=True)

    class Meta:
        ordering = ["name"]
        constraints = [models.UniqueConstraint(Lower("name"), name="company_name")]

    def __str__(self) -> str:
        return self.name


class People(BaseUserManager):
    """Finds people by e-mail, whatever the case it was typed in."""

    def get_by_natural_key(self, email: str | None) -> User:
        return self.get(email=(email or "").strip().lower())


class User(AbstractBaseUser):
    """One person. Signs in by e-mail; what they may do is settled by seats."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    email = models.EmailField(unique=True)
    name = models.CharField(max_length=120)
    initials = models.CharField(max_length=6, blank=True)
    licence_number = models.CharField(max_length=40, blank=True)
    phone = models.CharField(max_length=40, blank=True)
    company = models.ForeignKey(Company, models.PROTECT, related_name="people")
    firm_role = models.CharField(max_length=20, choices=FirmRole, default=FirmRole.NONE)
    is_active = models.BooleanField(default=True)
    since = models.DateTimeField(auto_now_add=True)

    objects = People()

    USERNAME_FIELD = "email"
    EMAIL_FIELD = "email"
    REQUIRED_FIELDS = ["name"]

    class Meta:
        ordering = ["name"]

    def __str__(self) -> str:
        return self.name

    def save(self, *args: object, **kwargs: object) -> None:
        self.email = self.email.strip().lower()
        super().save(*args, **kwargs)

    @property
    def is_manager(self) -> bool:
        return self.firm_role in (FirmRole.MANAGER, FirmRole.PRINCIPAL)

    @property
    def is_office(self) -> bool:
        return self.is_manager or self.firm_role == FirmRole.SURVEYOR


class FirmSpell(models.Model):
    """What a person was in the firm, from when to when.

    What somebody did is judged by the right they had when they did it, so a role that
    has ended must stay known.
    """

    person = models.ForeignKey(User, models.PROTECT, related_name="spells")
    role = models.CharField(max_length=20, choices=FirmRole)
    since = models.DateTimeField()
    until = models.DateTimeField(null=True)

    class Meta:
        ordering = ["since"]

    def __str__(self) -> str:
        return f"{self.role} from {self.since:%Y-%m-%d}"


class Crew(models.Model):
    """People who go out together, under a party chief."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    name = models.CharField(max_length=60)
    company = models.ForeignKey(Company, models.PROTECT, related_name="crews")
    party_chief = models.ForeignKey(User, models.PROTECT, related_name="leads")
    members = models.ManyToManyField(User, related_name="crews", blank=True)
    skills = models.JSONField(default=list, blank=True)
    is_active = models.BooleanField(default=True)

    class Meta:
        ordering = ["name"]
        constraints = [models.UniqueConstraint(Lower("name"), name="crew_name")]

    def __str__(self) -> str:
        return self.name
