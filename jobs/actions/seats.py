"""Give somebody a seat on a job, and end it."""

from __future__ import annotations

import uuid
from collections.abc import Iterable
from datetime import datetime

from django.utils import timezone

from jobs.kinds.seats import SeatEnded, SeatGiven
from jobs.models import Seat, User
from jobs.queries.seats import in_force
from jobs.rights import GRANTS, SEATED, Role
from stakes.can import Can
from stakes.models import Record
from stakes.record import By, Known, Refused, append, held


def give_seat(
    *,
    record: Record,
    person: User,
    roles: Iterable[Role],
    by: By,
    grants: Iterable[Can] = (),
    work: str = "",
    since: datetime | None = None,
    until: datetime | None = None,
    at: datetime | None = None,
) -> uuid.UUID:
    """Seat a person on a job; returns the seat's key."""
    wanted, granted = tuple(sorted(set(roles))), tuple(sorted(set(grants)))
    start = since or at or timezone.now()
    _refuse_person(person, wanted)
    _refuse_grants(wanted, granted)
    if until is not None and until <= start:
        raise Refused(
            "The seat would end before it begins.",
            do="Choose a later day, or leave the end open.",
            field="until",
        )
    fact = SeatGiven(
        seat=uuid.uuid4(),
        person=person.pk,
        name=person.name,
        company=person.company_id,
        company_name=person.company.name,
        roles=wanted,
        grants=granted,
        work=work.strip(),
        since=since,
        until=until,
    )
    with held(record) as locked:
        _refuse_twice(locked, person, wanted, start)
        append(locked, fact, by=by, at=at, known=Known.DECIDED)
    return fact.seat


def end_seat(
    *,
    record: Record,
    seat: uuid.UUID,
    by: By,
    why: str = "",
    until: datetime | None = None,
    at: datetime | None = None,
) -> None:
    """End a seat. What was done in it keeps the rights it had then."""
    with held(record) as locked:
        standing = Seat.objects.filter(record=locked, key=seat).first()
        if standing is None:
            raise Refused("There is no such seat on this job.", code="no seat")
        end = until or at or timezone.now()
        if standing.until is not None and standing.until <= end:
            raise Refused("This seat has ended already.", code="ended")
        fact = SeatEnded(
            seat=seat,
            person=standing.person_id,
            name=standing.name,
            until=until,
            why=why.strip(),
        )
        append(locked, fact, by=by, at=at, known=Known.DECIDED)


def _refuse_person(person: User, roles: tuple[Role, ...]) -> None:
    if not person.is_active:
        raise Refused(
            f"The account of {person.name} is closed.",
            do="Open it again first, or seat somebody else.",
            field="person",
        )
    if not roles:
        raise Refused("A seat needs a role.", do="Choose at least one.", field="roles")
    company = person.company
    for role in roles:
        if role not in SEATED[company.kind]:
            raise Refused(
                f"{person.name} of {company.name} cannot be {role} here.",
                where=f"The company is kept as {company.get_kind_display().lower()}.",
                do=f"Choose from: {', '.join(sorted(SEATED[company.kind]))}.",
                field="roles",
            )


def _refuse_grants(roles: tuple[Role, ...], grants: tuple[Can, ...]) -> None:
    possible = {right for role in roles for right in GRANTS.get(role, ())}
    for right in grants:
        if right not in possible:
            raise Refused(
                f"The right to {right} cannot be granted to {' and '.join(roles)}.",
                do="It goes to a party chief (issue) or an auditor (prices).",
                field="grants",
            )


def _refuse_twice(
    record: Record, person: User, roles: tuple[Role, ...], start: datetime
) -> None:
    standing = Seat.objects.filter(in_force(start), record=record, person=person)
    held_roles = {role for seat in standing for role in seat.roles}
    again = [role for role in roles if role in held_roles]
    if again:
        raise Refused(
            f"{person.name} is {' and '.join(again)} on this job already.",
            do="End that seat first, or give only what is missing.",
            field="roles",
            code="has it",
        )
