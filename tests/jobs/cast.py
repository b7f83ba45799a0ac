"""The cast: one person for each role, their companies, and a job they share.

Names are roles. What nobody else's company may learn of the masons is spelled with
words found nowhere else, so that a page that leaks them can be caught.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date

from geometry.units import Unit
from jobs.actions.open_job import open_job
from jobs.actions.people import add_company, add_person
from jobs.actions.seats import give_seat
from jobs.actions.terms import set_restake_terms
from jobs.defaults import default_payers
from jobs.kinds.terms import NoticeRule
from jobs.models import Company, CompanyKind, FirmRole, Job, User
from jobs.queries.seats import by_of
from jobs.rights import Role
from stakes.record import By

CANARY_COMPANY = "Zebrawood Masonry"
CANARY_PERSON = "Quillfeather"
CANARY_PHONE = "555-0177-331"
CANARY_PRICE = "7731.45 a stake"
CANARIES = (CANARY_COMPANY, CANARY_PERSON, CANARY_PHONE, CANARY_PRICE)

BY = By(person="11111111-1111-4111-8111-111111111111", name="Manager")


@dataclass
class Cast:
    """Everybody by their role."""

    manager: User
    surveyor: User
    party_chief: User
    crew: User
    contractor: User
    mason: User
    inspector: User
    auditor: User
    subcontractor: User
    outsider: User

    @property
    def everybody(self) -> dict[str, User]:
        return dict(vars(self))

    @property
    def by(self) -> By:
        return by_of(self.manager)


SEATS = {
    "party_chief": Role.PARTY_CHIEF,
    "crew": Role.CREW,
    "contractor": Role.CONTRACTOR,
    "mason": Role.CONTRACTOR,
    "inspector": Role.INSPECTOR,
    "auditor": Role.AUDITOR,
    "subcontractor": Role.SUBCONTRACTED,
}
"""Who is seated as what; the office needs no seat and the outsider has none."""


def make_cast() -> Cast:
    firm = add_company(name="Northgate Survey", kind=CompanyKind.FIRM)
    builder = add_company(name="Harbour Builders", kind=CompanyKind.GENERAL)
    masons = add_company(
        name=CANARY_COMPANY, kind=CompanyKind.TRADE, phone=CANARY_PHONE
    )
    owner = add_company(name="Clinic Trust", kind=CompanyKind.OWNER)
    satellite = add_company(name="Ridge Satellite", kind=CompanyKind.SUBCONTRACTED)
    other = add_company(name="Elsewhere Paving", kind=CompanyKind.TRADE)

    def one(
        name: str, company: Company, role: FirmRole = FirmRole.NONE, phone: str = ""
    ) -> User:
        email = f"{name.lower().replace(' ', '.')}@example.com"
        return add_person(
            email=email, name=name, company=company, firm_role=role, phone=phone
        )

    return Cast(
        manager=one("Manager", firm, FirmRole.MANAGER),
        surveyor=one("Surveyor", firm, FirmRole.SURVEYOR),
        party_chief=one("Party Chief", firm, FirmRole.CREW),
        crew=one("Rod Person", firm, FirmRole.CREW),
        contractor=one("Superintendent", builder),
        mason=one(CANARY_PERSON, masons, phone=CANARY_PHONE),
        inspector=one("Inspector", owner),
        auditor=one("Auditor", owner),
        subcontractor=one("Satellite Crew", satellite),
        outsider=one("Paver", other),
    )


def make_job(number: str = "2614", *, unit: Unit = Unit.FOOT, by: By = BY) -> Job:
    return open_job(
        number=number,
        name=f"Clinic {number}",
        place="Harbour Road, north gate",
        unit=unit,
        zone="America/Chicago",
        frame="local site grid",
        notice=NoticeRule(count=2, of="business days"),
        by=by,
    )


def seat_everybody(job: Job, cast: Cast) -> None:
    """Give each role its seat, and agree a price with the masons alone."""
    for who, role in SEATS.items():
        person = cast.everybody[who]
        give_seat(record=job.record, person=person, roles=[role], by=cast.by)
    set_restake_terms(
        record=job.record,
        payers=default_payers(),
        price=CANARY_PRICE,
        company=cast.mason.company,
        effective=date(2026, 1, 5),
        by=cast.by,
    )
