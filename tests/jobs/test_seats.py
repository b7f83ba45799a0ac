"""Seats: given, ended, limited in time, and the rights they come to."""

from __future__ import annotations

from datetime import timedelta

import pytest
from django.utils import timezone

from jobs.actions.people import change_person, deactivate_person
from jobs.actions.seats import end_seat, give_seat
from jobs.models import FirmRole, Job, Seat
from jobs.queries.jobs import jobs_of
from jobs.queries.seats import asked, seat_at, seat_now
from jobs.rights import RIGHTS, Role, rights_of
from stakes.can import Can
from stakes.record import Refused
from tests.jobs.cast import Cast

AN_HOUR = timedelta(hours=1)


def give(job: Job, cast: Cast, who: str, *roles: Role, **more: object) -> object:
    person = cast.everybody[who]
    return give_seat(record=job.record, person=person, roles=roles, by=cast.by, **more)


def test_the_office_has_a_seat_on_every_job_without_being_given_one(
    job: Job, cast: Cast
) -> None:
    assert seat_now(job.record, cast.manager).rights == RIGHTS[Role.MANAGER]
    assert seat_now(job.record, cast.surveyor).rights == RIGHTS[Role.SURVEYOR]
    assert seat_now(job.record, cast.party_chief) is None
    assert seat_now(job.record, cast.contractor) is None


def test_only_the_surveyor_issues_adopts_and_sends_holds() -> None:
    for right in (Can.ISSUE, Can.ADOPT, Can.SEND_HOLD, Can.PASS_GATE):
        assert [role for role in Role if right in RIGHTS[role]] == [Role.SURVEYOR]


def test_an_auditor_changes_nothing() -> None:
    assert RIGHTS[Role.AUDITOR] == {
        Can.READ,
        Can.READ_RECORD,
        Can.SEE_VISITS,
        Can.SEE_HOLDS,
        Can.EXPORT,
    }


def test_the_crew_sees_no_prices() -> None:
    seeing = {role for role in Role if Can.SEE_PRICES in RIGHTS[role]}

    assert seeing == {Role.MANAGER, Role.SURVEYOR, Role.CONTRACTOR, Role.INSPECTOR}


def test_rights_of_several_roles_are_their_union(job: Job, cast: Cast) -> None:
    give(job, cast, "party_chief", Role.PARTY_CHIEF, Role.SURVEYOR)

    rights = seat_now(job.record, cast.party_chief).rights

    assert rights == RIGHTS[Role.PARTY_CHIEF] | RIGHTS[Role.SURVEYOR]


def test_one_person_may_be_the_whole_firm(job: Job, cast: Cast) -> None:
    change_person(
        person=cast.manager,
        email=cast.manager.email,
        name=cast.manager.name,
        firm_role=FirmRole.PRINCIPAL,
    )

    rights = seat_now(job.record, cast.manager).rights

    assert {Can.SEATS, Can.ISSUE} <= rights


def test_a_grant_counts_only_for_the_role_it_can_be_granted_to(
    job: Job, cast: Cast
) -> None:
    give(job, cast, "auditor", Role.AUDITOR, grants=[Can.SEE_PRICES])
    assert Can.SEE_PRICES in seat_now(job.record, cast.auditor).rights

    with pytest.raises(Refused) as refused:
        give(job, cast, "crew", Role.CREW, grants=[Can.ISSUE])
    assert refused.value.field == "grants"
    assert Can.ISSUE not in rights_of([Role.CREW], [Can.ISSUE])


def test_a_delegated_issue_ends_with_its_day(job: Job, cast: Cast) -> None:
    now = timezone.now()
    give(
        job,
        cast,
        "party_chief",
        Role.PARTY_CHIEF,
        grants=[Can.ISSUE],
        work="footings of wing B",
        until=now + AN_HOUR,
    )

    within = seat_at(job.record, cast.party_chief, now + AN_HOUR / 2)
    assert Can.ISSUE in within.rights
    assert seat_at(job.record, cast.party_chief, now + AN_HOUR) is None


def test_what_was_done_is_judged_by_the_seat_of_that_moment(
    job: Job, cast: Cast
) -> None:
    start = timezone.now() - 5 * AN_HOUR
    seat = give(job, cast, "crew", Role.CREW, since=start)
    end_seat(record=job.record, seat=seat, until=start + AN_HOUR, by=cast.by)

    assert seat_at(job.record, cast.crew, start - AN_HOUR) is None
    assert Can.RECORD in seat_at(job.record, cast.crew, start + AN_HOUR / 2).rights
    assert seat_now(job.record, cast.crew) is None


def test_a_person_who_left_the_firm_keeps_the_rights_they_had_then(
    job: Job, cast: Cast
) -> None:
    then = timezone.now()
    change_person(
        person=cast.surveyor,
        email=cast.surveyor.email,
        name=cast.surveyor.name,
        firm_role=FirmRole.NONE,
        at=then + AN_HOUR,
    )

    assert Can.ISSUE in seat_at(job.record, cast.surveyor, then + AN_HOUR / 2).rights
    assert seat_at(job.record, cast.surveyor, then + AN_HOUR) is None
    assert seat_now(job.record, cast.surveyor) is None


def test_a_closed_account_has_no_seat_now_and_kept_the_one_it_had(
    job: Job, cast: Cast
) -> None:
    then = timezone.now()
    deactivate_person(person=cast.surveyor)

    assert seat_now(job.record, cast.surveyor) is None
    assert seat_at(job.record, cast.surveyor, then) is not None


@pytest.mark.parametrize(
    ("who", "role"),
    [
        ("contractor", Role.SURVEYOR),
        ("contractor", Role.CREW),
        ("crew", Role.CONTRACTOR),
        ("subcontractor", Role.PARTY_CHIEF),
        ("inspector", Role.CONTRACTOR),
    ],
)
def test_a_role_that_does_not_fit_the_company_is_refused(
    job: Job, cast: Cast, who: str, role: Role
) -> None:
    with pytest.raises(Refused) as refused:
        give(job, cast, who, role)

    assert refused.value.field == "roles"
    assert Seat.objects.count() == 0


def test_the_same_seat_is_not_given_twice(job: Job, cast: Cast) -> None:
    give(job, cast, "crew", Role.CREW)

    with pytest.raises(Refused) as refused:
        give(job, cast, "crew", Role.CREW)
    assert refused.value.code == "has it"


def test_a_seat_of_another_job_cannot_be_ended_here(job: Job, cast: Cast) -> None:
    from tests.jobs.cast import make_job

    seat = give(job, cast, "crew", Role.CREW)
    other = make_job("2615", by=cast.by)

    with pytest.raises(Refused) as refused:
        end_seat(record=other.record, seat=seat, by=cast.by)
    assert refused.value.code == "no seat"


def test_a_contractor_lists_only_the_jobs_they_sit_on(job: Job, cast: Cast) -> None:
    from tests.jobs.cast import make_job

    make_job("2615", by=cast.by)
    give(job, cast, "contractor", Role.CONTRACTOR)

    assert [j.number for j in jobs_of(cast.contractor)] == ["2614"]
    assert {j.number for j in jobs_of(cast.manager)} == {"2614", "2615"}


def test_the_door_hands_on_who_asks_and_for_which_company(job: Job, cast: Cast) -> None:
    give(job, cast, "contractor", Role.CONTRACTOR)

    settled = asked(job.record, cast.contractor, job_name=job.name, device="tablet 2")

    assert settled.by.person == str(cast.contractor.pk)
    assert settled.by.name == "Superintendent"
    assert settled.by.device == "tablet 2"
    assert settled.company == str(cast.contractor.company_id)
    assert settled.roles == {"contractor"}
