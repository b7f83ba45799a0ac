"""Keep people, companies and crews. They are closed, never deleted."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from datetime import datetime

from django.core.exceptions import ValidationError
from django.core.validators import validate_email
from django.db import IntegrityError, transaction
from django.utils import timezone

from jobs.actions.checked import checked_text
from jobs.models import Company, CompanyKind, Crew, FirmRole, FirmSpell, User
from stakes.record import Refused


def add_company(*, name: str, kind: CompanyKind, phone: str = "") -> Company:
    """Keep a company whose people come to jobs."""
    return _kept_company(Company(kind=kind), name, phone)


def change_company(*, company: Company, name: str, phone: str) -> Company:
    """Write name or telephone anew. The kind stays: seats were given by it."""
    return _kept_company(company, name, phone)


def add_person(
    *,
    email: str,
    name: str,
    company: Company,
    firm_role: FirmRole = FirmRole.NONE,
    initials: str = "",
    licence_number: str = "",
    phone: str = "",
    at: datetime | None = None,
) -> User:
    """Keep a person. They set their own password by a link, before they can sign in."""
    person = User(company=company)
    person.set_unusable_password()
    _describe(person, email, name, initials, licence_number, phone)
    _refuse_firm_role(company, firm_role)
    with transaction.atomic():
        _save_person(person)
        _take_firm_role(person, firm_role, at or timezone.now())
    return person


def change_person(
    *,
    person: User,
    email: str,
    name: str,
    firm_role: FirmRole,
    initials: str = "",
    licence_number: str = "",
    phone: str = "",
    at: datetime | None = None,
) -> User:
    """Write a person anew. What the record says of them keeps the name they had."""
    _describe(person, email, name, initials, licence_number, phone)
    _refuse_firm_role(person.company, firm_role)
    with transaction.atomic():
        if person.is_manager and not _managing(firm_role):
            _refuse_last_manager(person)
        _save_person(person)
        if person.firm_role != firm_role:
            _take_firm_role(person, firm_role, at or timezone.now())
    return person


def deactivate_person(*, person: User) -> None:
    """Close an account at once, sessions and tokens included. Nothing is deleted."""
    with transaction.atomic():
        if person.is_manager:
            _refuse_last_manager(person)
        person.is_active = False
        person.save(update_fields=["is_active"])


def reactivate_person(*, person: User) -> None:
    """Open a closed account again."""
    person.is_active = True
    person.save(update_fields=["is_active"])


def keep_crew(
    *,
    name: str,
    company: Company,
    party_chief: User,
    members: Iterable[User] = (),
    skills: Sequence[str] = (),
    crew: Crew | None = None,
) -> Crew:
    """Put a crew together, or write one anew. The party chief is always of it."""
    crew = crew or Crew()
    together = {party_chief, *members}
    stranger = next((p for p in together if p.company_id != company.pk), None)
    if stranger is not None:
        raise Refused(
            f"{stranger.name} is not of {company.name}.",
            do="A crew is made of people of one company.",
            field="members",
        )
    crew.name, crew.company, crew.party_chief = name.strip(), company, party_chief
    crew.skills = [skill.strip() for skill in skills if skill.strip()]
    try:
        with transaction.atomic():
            crew.save()
            crew.members.set(together)
    except IntegrityError as error:
        raise _named_twice("crew", name) from error
    return crew


def disband_crew(*, crew: Crew) -> None:
    """Keep the crew for its past visits, and plan no more with it."""
    crew.is_active = False
    crew.save(update_fields=["is_active"])


def _kept_company(company: Company, name: str, phone: str) -> Company:
    company.name, company.phone = name.strip(), phone.strip()
    if not company.name:
        raise Refused("A company needs a name.", do="Write one.", field="name")
    try:
        with transaction.atomic():
            company.save()
    except IntegrityError as error:
        raise _named_twice("company", name) from error
    return company


def _describe(
    person: User, email: str, name: str, initials: str, licence: str, phone: str
) -> None:
    person.email, person.name = email.strip().lower(), name.strip()
    person.initials, person.phone = initials.strip(), phone.strip()
    person.licence_number = licence.strip()
    if not person.name:
        raise Refused("A person needs a name.", do="Write it.", field="name")
    try:
        checked_text(person.email, "email", most=254)
        validate_email(person.email)
    except ValidationError as error:
        raise Refused(
            f"{email.strip()!r} is not an e-mail address.",
            do="Write one like name@example.com.",
            field="email",
        ) from error


def _save_person(person: User) -> None:
    # The unique column decides: between a look and a save another may take it.
    try:
        with transaction.atomic():
            person.save()
    except IntegrityError as error:
        raise Refused(
            f"{person.email} belongs to another person.",
            do="Every person signs in by an address of their own.",
            field="email",
            code="taken",
        ) from error


def _refuse_firm_role(company: Company, firm_role: FirmRole) -> None:
    if firm_role != FirmRole.NONE and company.kind != CompanyKind.FIRM:
        raise Refused(
            f"{company.name} is not the survey firm.",
            do="People of other companies have no role in the firm.",
            field="firm_role",
        )


def _take_firm_role(person: User, firm_role: FirmRole, at: datetime) -> None:
    FirmSpell.objects.filter(person=person, until=None).update(until=at)
    FirmSpell.objects.create(person=person, role=firm_role, since=at)
    person.firm_role = firm_role
    person.save(update_fields=["firm_role"])


def _managing(firm_role: str) -> bool:
    return firm_role in (FirmRole.MANAGER, FirmRole.PRINCIPAL)


def _refuse_last_manager(person: User) -> None:
    # All of them are locked: two who close each other's account must not both succeed.
    managers = User.objects.select_for_update().filter(
        firm_role__in=[FirmRole.MANAGER, FirmRole.PRINCIPAL], is_active=True
    )
    if {pk for (pk,) in managers.values_list("pk")} <= {person.pk}:
        raise Refused(
            f"{person.name} is the last manager of the firm.",
            do="Make somebody else a manager first.",
            field="firm_role",
            code="last manager",
        )


def _named_twice(what: str, name: str) -> Refused:
    return Refused(
        f"There is a {what} called {name.strip()!r} already.",
        do="Open that one, or choose another name.",
        field="name",
        code="taken",
    )
