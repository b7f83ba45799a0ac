"""The people of the demo: a firm, three trades, an owner, an auditor, a satellite crew."""

from __future__ import annotations

from jobs.actions.people import add_company, add_person, keep_crew
from jobs.demo.telling import PASSWORD, Cast
from jobs.models import Company, CompanyKind, FirmRole, User

ROLES = (
    ("manager", "Manager", "firm", FirmRole.MANAGER),
    ("surveyor", "Licensed surveyor", "firm", FirmRole.SURVEYOR),
    ("chief", "Party chief", "firm", FirmRole.CREW),
    ("rod", "Rod person", "firm", FirmRole.CREW),
    ("superintendent", "Superintendent", "builder", FirmRole.NONE),
    ("mason", "Foreman of the masons", "masons", FirmRole.NONE),
    ("digger", "Foreman of the earthworks", "earthworks", FirmRole.NONE),
    ("inspector", "Owner's inspector", "owner", FirmRole.NONE),
    ("auditor", "Auditor", "owner", FirmRole.NONE),
    ("satellite", "Satellite crew chief", "satellite", FirmRole.NONE),
)


def make_cast() -> Cast:
    """Companies and people, each able to sign in with the demo's password."""
    cast = Cast(
        firm=_company("Plumb Line Surveying", CompanyKind.FIRM),
        builder=_company("General contractor", CompanyKind.GENERAL),
        masons=_company("Masonry contractor", CompanyKind.TRADE),
        earthworks=_company("Earthworks contractor", CompanyKind.TRADE),
        owner=_company("Clinic owner", CompanyKind.OWNER),
        satellite=_company("Satellite survey crew", CompanyKind.SUBCONTRACTED),
    )
    for number, (role, name, company, firm_role) in enumerate(ROLES, start=1):
        person = add_person(
            email=f"{role}@example.com",
            name=name,
            company=getattr(cast, company),
            firm_role=firm_role,
            phone=f"555-01{number:02d}",
            **({"licence_number": "LS 4417"} if role == "surveyor" else {}),
        )
        _let_in(person)
        cast.people[role] = person
    keep_crew(
        name="Crew 1",
        company=cast.firm,
        party_chief=cast.people["chief"],
        members=[cast.people["chief"], cast.people["rod"]],
        skills=["building layout", "levels"],
    )
    return cast


def _company(name: str, kind: CompanyKind) -> Company:
    phone = "555-0100" if kind is CompanyKind.FIRM else "555-0190"
    return add_company(name=name, kind=kind, phone=phone)


def _let_in(person: User) -> None:
    person.set_password(PASSWORD)
    person.save()
