"""Opening a job, giving seats and setting terms over HTTP, with right and wrong input."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from django.test import Client

from jobs.models import Company, Crew, Job, Seat, User
from jobs.queries.terms import terms_at, today
from stakes.models import Record
from tests.jobs.cast import Cast

SignedIn = Callable[[User], Client]

NEW = {
    "number": "2650",
    "name": "Warehouse",
    "unit": "ftUS",
    "zone": "America/Denver",
    "frame": "state plane, north zone",
    "combined_factor": "0.99985932",
    "count": "3",
    "of": "business days",
}


def test_a_manager_opens_a_job_and_lands_on_it(cast: Cast, signed_in: SignedIn) -> None:
    answer = signed_in(cast.manager).post("/jobs/open/", NEW, follow=True)

    assert answer.redirect_chain == [("/jobs/2650/", 303)]
    record = Record.objects.get(number="2650")
    assert (record.unit, record.zone) == ("ftUS", "America/Denver")
    terms = terms_at(record, today(record))
    assert terms.frame.combined_factor == "0.99985932"
    assert terms.notice_rule.count == 3


@pytest.mark.parametrize(
    ("field", "wrong", "sentence"),
    [
        ("number", "2614", "There is a job 2614 already."),
        ("number", "../etc", "cannot stand in the address"),
        ("number", "", "This field is required."),
        ("unit", "yard", "Select a valid choice"),
        ("zone", "Mars/Base", "Select a valid choice"),
        ("combined_factor", "99.98", "is not a combined factor"),
        ("count", "-1", "greater than or equal to 0"),
        ("count", "9" * 30, "less than or equal to 1000"),
        ("name", "x" * 121, "at most 120 characters"),
        ("name", "a\x00b", "Null characters are not allowed"),
    ],
)
def test_wrong_input_is_answered_by_its_field_and_keeps_what_was_typed(
    cast: Cast, job: Job, signed_in: SignedIn, field: str, wrong: str, sentence: str
) -> None:
    answer = signed_in(cast.manager).post("/jobs/open/", {**NEW, field: wrong})

    assert answer.status_code == 422
    assert sentence in answer.context["form"].errors[field][0]
    assert "state plane, north zone" in answer.content.decode()
    assert Record.objects.count() == 1


def test_what_people_type_is_never_run_as_a_page(
    cast: Cast, signed_in: SignedIn
) -> None:
    client = signed_in(cast.manager)
    client.post("/jobs/open/", {**NEW, "name": "<script>alert(1)</script>"})

    assert "<script>alert(1)" not in client.get("/jobs/2650/").content.decode()
    assert "&lt;script&gt;" in client.get("/").content.decode()


def test_a_seat_is_given_and_ended_on_its_page(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    client = signed_in(cast.manager)
    person = str(cast.outsider.pk)
    given = client.post(
        "/jobs/2614/people/give/", {"person": person, "roles": ["contractor"]}
    )
    assert given.status_code == 303
    assert signed_in(cast.outsider).get("/jobs/2614/").status_code == 200

    seat = Seat.objects.get(person=cast.outsider)
    client.post(f"/jobs/2614/people/{seat.key}/end/", {"why": "work is done"})
    assert signed_in(cast.outsider).get("/jobs/2614/").status_code == 404


def test_the_last_day_of_a_seat_is_a_whole_day_of_the_site(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    signed_in(cast.manager).post(
        "/jobs/2614/people/give/",
        {
            "person": str(cast.outsider.pk),
            "roles": ["contractor"],
            "since": "2026-03-02",
            "until": "2026-03-08",
        },
    )

    seat = Seat.objects.get(person=cast.outsider)
    assert seat.since.isoformat() == "2026-03-02T06:00:00+00:00"
    # Summer time begins on 8 March, so the day after begins an hour earlier.
    assert seat.until.isoformat() == "2026-03-09T05:00:00+00:00"


def test_a_wrong_role_is_answered_by_the_question_of_roles(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    answer = signed_in(cast.manager).post(
        "/jobs/2614/people/give/",
        {"person": str(cast.outsider.pk), "roles": ["surveyor"]},
    )

    assert "cannot be surveyor here" in answer.context["form"].errors["roles"][0]


def test_notice_is_set_with_its_holidays(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    said = {
        "count": "48",
        "of": "hours",
        "cut_off": "14:00",
        "day_begins": "06:30",
        "weekdays": ["0", "1", "2", "3", "4", "5"],
        "holidays": "2026-11-26\n\n2026-07-03\n",
        "source": "subcontract, article 4",
        "effective": today(job.record).isoformat(),
    }
    client = signed_in(cast.manager)
    assert client.post("/jobs/2614/terms/notice/", said).status_code == 303
    wrong = client.post(
        "/jobs/2614/terms/notice/", {**said, "holidays": "2026-11-26\nThanksgiving"}
    )

    rule = terms_at(job.record, today(job.record)).notice_rule
    assert (rule.count, rule.of, rule.cut_off.hour) == (48, "hours", 14)
    assert [d.isoformat() for d in rule.holidays] == ["2026-07-03", "2026-11-26"]
    assert "Line 2, 'Thanksgiving'" in wrong.context["form"].errors["holidays"][0]


def test_a_tolerance_class_is_confirmed_by_writing_it_anew(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    before = terms_at(job.record, today(job.record)).classes
    first = before[0]
    address = f"/jobs/2614/terms/tolerances/{first.key}/"
    said = {
        "name": first.name,
        "position": "0.015",
        "elevation": "3 mm",
        "rule": "guard band",
        "reaches": ["place", "height"],
        "grade": "2",
        "source": "contract, section 01 71 23",
        "effective": today(job.record).isoformat(),
    }
    client = signed_in(cast.surveyor)
    wrong = client.post(address, said)
    assert wrong.status_code == 422 and "elevation" in wrong.context["form"].errors

    assert client.post(address, {**said, "elevation": "0.003 m"}).status_code == 303

    classes = terms_at(job.record, today(job.record)).classes
    anew = classes[0]
    assert len(classes) == len(before)
    assert (anew.key, anew.default, anew.grade) == (first.key, False, 2)
    assert anew.position.nm == "4572000"
    assert anew.elevation.nm == "3000000"


def test_a_tolerance_class_is_taken_out_and_another_added(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    client = signed_in(cast.surveyor)
    first = terms_at(job.record, today(job.record)).classes[0]
    day = today(job.record).isoformat()
    base = f"/jobs/2614/terms/tolerances/{first.key}/remove/"
    assert client.post(base, {"effective": day}).status_code == 303
    assert client.get(base).status_code == 404

    client.post(
        "/jobs/2614/terms/tolerances/add/",
        {
            "name": "Crane rails",
            "position": "0.005",
            "rule": "guard band",
            "grade": "1",
            "effective": day,
        },
    )

    names = [c.name for c in terms_at(job.record, today(job.record)).classes]
    assert first.name not in names and names[-1] == "Crane rails"


def test_who_pays_is_agreed_with_one_company(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    client = signed_in(cast.manager)
    page = client.get("/jobs/2614/terms/re-stake/")
    started = {
        name: value
        for name, value in page.context["form"].initial.items()
        if value is not False
    }
    company = str(cast.contractor.company_id)
    said = {**started, "company": company, "price": "95 an hour"}
    said["effective"] = today(job.record).isoformat()
    assert client.post("/jobs/2614/terms/re-stake/", said).status_code == 303

    terms = client.get("/jobs/2614/terms/").content.decode()
    assert "95 an hour" in terms
    assert "95 an hour" in (
        signed_in(cast.contractor).get("/jobs/2614/terms/").content.decode()
    )
    assert "95 an hour" not in (
        signed_in(cast.mason).get("/jobs/2614/terms/").content.decode()
    )


def test_people_companies_and_crews_are_kept_on_their_pages(
    cast: Cast, signed_in: SignedIn
) -> None:
    client = signed_in(cast.manager)
    client.post("/companies/add/", {"name": "Pipe Works", "kind": "trade"})
    company = Company.objects.get(name="Pipe Works")
    added = client.post(
        "/people/add/",
        {
            "name": "Foreman",
            "email": "Foreman@Example.com",
            "company": str(company.pk),
            "firm_role": "none",
        },
    )
    person = User.objects.get(email="foreman@example.com")
    assert added.url == f"/people/{person.pk}/"

    again = client.post("/companies/add/", {"name": "pipe works", "kind": "trade"})
    assert "already" in again.context["form"].errors["name"][0]

    client.post(
        "/crews/add/",
        {
            "name": "North crew",
            "party_chief": str(cast.party_chief.pk),
            "members": [str(cast.crew.pk)],
            "skills": "levelling, , satellite",
        },
    )
    crew = Crew.objects.get()
    assert crew.skills == ["levelling", "satellite"]
    assert set(crew.members.all()) == {cast.party_chief, cast.crew}


def test_the_last_manager_is_told_on_the_page_why_they_stay(
    cast: Cast, signed_in: SignedIn
) -> None:
    answer = signed_in(cast.manager).post(
        f"/people/{cast.manager.pk}/close/", follow=True
    )

    assert "is the last manager" in answer.content.decode()
    cast.manager.refresh_from_db()
    assert cast.manager.is_active


@pytest.mark.parametrize("who", ["manager", "surveyor"])
def test_the_job_list_asks_no_more_of_the_database_for_more_jobs(
    cast: Cast, signed_in: SignedIn, who: str
) -> None:
    from django.db import connection
    from django.test.utils import CaptureQueriesContext

    from tests.jobs.cast import make_job

    client = signed_in(cast.everybody[who])
    make_job("3000", by=cast.by)
    with CaptureQueriesContext(connection) as one:
        client.get("/")
    for n in range(5):
        make_job(f"30{n + 10}", by=cast.by)
    with CaptureQueriesContext(connection) as six:
        client.get("/")
    assert len(six) == len(one)
