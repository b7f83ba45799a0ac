"""Which seat a person has on a job, now or at any moment."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime

from django.db.models import Q, QuerySet
from django.utils import timezone

from jobs.models import Company, FirmSpell, Seat, User
from jobs.rights import INSIDERS, OF_THE_FIRM, Role, rights_of
from stakes.can import Asked, Can
from stakes.models import Record
from stakes.record import By


@dataclass(frozen=True, slots=True)
class SeatThen:
    """All that a person's seats on one job came to at one moment."""

    roles: frozenset[Role]
    rights: frozenset[Can]
    company: str

    @property
    def sees_all_companies(self) -> bool:
        return bool(self.roles & INSIDERS)


def in_force(moment: datetime) -> Q:
    """Seats that stand at a moment: from `since`, up to but without `until`."""
    return Q(since__lte=moment) & (Q(until__isnull=True) | Q(until__gt=moment))


def seat_at(record: Record, person: User, moment: datetime) -> SeatThen | None:
    """The seat a person had on a job at a moment; None: an outsider then."""
    seats = Seat.objects.filter(in_force(moment), record=record, person=person)
    return _together(_firm_roles_at(person, moment), list(seats), person)


def seat_now(record: Record, person: User) -> SeatThen | None:
    """The seat a person has on a job; nobody has one whose account is closed."""
    if not person.is_active:
        return None
    seats = Seat.objects.filter(in_force(timezone.now()), record=record, person=person)
    return _together(OF_THE_FIRM[person.firm_role], list(seats), person)


def seats_on(person: User, records: Iterable[Record]) -> dict[int, SeatThen]:
    """The seat a person has now on each of several jobs, by record; one query."""
    if not person.is_active:
        return {}
    firm = OF_THE_FIRM[person.firm_role]
    listed = list(records)
    by_record: dict[int, list[Seat]] = {record.pk: [] for record in listed}
    held = Seat.objects.filter(in_force(timezone.now()), person=person)
    for seat in held.filter(record__in=listed):
        by_record[seat.record_id].append(seat)
    found = {key: _together(firm, seats, person) for key, seats in by_record.items()}
    return {key: seat for key, seat in found.items() if seat is not None}


def asked(
    record: Record, person: User, *, job_name: str, device: str = ""
) -> Asked | None:
    """What the door hands to a page; None: an outsider, who learns nothing."""
    seat = seat_now(record, person)
    if seat is None:
        return None
    return Asked(
        record=record,
        by=by_of(person, device),
        rights=seat.rights,
        company=seat.company,
        roles=frozenset(str(role) for role in seat.roles),
        job_name=job_name,
    )


def by_of(person: User, device: str = "") -> By:
    """A person as the record names them."""
    return By(person=str(person.pk), name=person.name, device=device)


def seats_of(record: Record, moment: datetime | None = None) -> QuerySet[Seat]:
    """Seats given on a job: all that ever were, or those in force at a moment."""
    seats = Seat.objects.filter(record=record).select_related("person", "company")
    if moment is not None:
        seats = seats.filter(in_force(moment))
    return seats.order_by("company_name", "name", "since")


def companies_of(record: Record) -> QuerySet[Company]:
    """The companies that have, or had, somebody seated on a job."""
    return Company.objects.filter(seats__record=record).distinct().order_by("name")


def people_of(record: Record, company: str) -> list[User]:
    """People of a company who hold a seat on a job now."""
    seats = Seat.objects.filter(in_force(timezone.now()), record=record)
    held = seats.filter(person__is_active=True).select_related("person")
    return [seat.person for seat in held if str(seat.company_id) == company]


def office() -> QuerySet[User]:
    """The firm's managers and surveyors, who have a seat on every job."""
    roles = [role for role, seated in OF_THE_FIRM.items() if seated]
    return User.objects.filter(is_active=True, firm_role__in=roles).order_by("name")


def _firm_roles_at(person: User, moment: datetime) -> frozenset[Role]:
    spell = FirmSpell.objects.filter(in_force(moment), person=person).last()
    return OF_THE_FIRM[spell.role] if spell else frozenset()


def _together(
    firm: frozenset[Role], seats: Iterable[Seat], person: User
) -> SeatThen | None:
    roles = firm | {Role(role) for seat in seats for role in seat.roles}
    if not roles:
        return None
    granted = {right for seat in seats for right in seat.grants}
    company = next((str(seat.company_id) for seat in seats), str(person.company_id))
    return SeatThen(roles, rights_of(roles, granted), company)
