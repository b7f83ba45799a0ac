"""Opening, describing and closing a job."""

from __future__ import annotations

import pytest

from geometry.units import Unit
from jobs.actions.open_job import close_job, describe_job, open_job, reopen_job
from jobs.models import Job
from jobs.queries.terms import terms_at, today
from stakes.models import Record
from stakes.record import Refused, entries
from tests.jobs.cast import Cast, make_job


def test_opening_makes_the_record_and_says_so_first(job: Job) -> None:
    first = entries(job.record)[0]

    assert first.number == 1
    assert first.kind == "job opened"
    assert first.fact.sentence() == "Job 2614, Clinic 2614, was opened."
    assert (job.record.unit, job.record.zone) == ("ft", "America/Chicago")


def test_a_job_starts_with_defaults_that_say_they_are(job: Job) -> None:
    terms = terms_at(job.record, today(job.record))

    assert terms.classes and all(c.default and c.source for c in terms.classes)
    assert terms.hold_time.total_seconds() == 30 * 60
    assert terms.payer_for("surveyor's error").payer == "survey firm, no charge"
    assert terms.notice_rule.count == 2
    assert terms.frame.frame == "local site grid"


def test_a_metric_job_gets_its_tolerances_in_metres(cast: Cast) -> None:
    job = make_job("R-7", unit=Unit.METRE, by=cast.by)

    classes = terms_at(job.record, today(job.record)).classes

    assert {c.position.unit for c in classes} == {"m"}


def test_a_number_can_be_given_once(job: Job, cast: Cast) -> None:
    with pytest.raises(Refused) as refused:
        make_job("2614", by=cast.by)

    assert refused.value.field == "number"
    assert Record.objects.count() == 1


@pytest.mark.parametrize("number", ["open", "a/b", "", " ", "-1", "2614 b", "x" * 21])
def test_a_number_that_cannot_stand_in_an_address_is_refused(
    cast: Cast, number: str
) -> None:
    with pytest.raises(Refused) as refused:
        make_job(number, by=cast.by)

    assert refused.value.field == "number"
    assert Record.objects.count() == 0


@pytest.mark.parametrize(
    ("field", "wrong"),
    [("zone", "Chicago time"), ("name", "  "), ("combined_factor", "1.2")],
)
def test_what_cannot_hold_is_refused_and_nothing_is_kept(
    cast: Cast, field: str, wrong: str
) -> None:
    said = {
        "number": "2614",
        "name": "Clinic",
        "unit": Unit.FOOT,
        "zone": "America/Chicago",
        "frame": "state plane",
        "by": cast.by,
    }
    with pytest.raises(Refused) as refused:
        open_job(**{**said, field: wrong})

    assert refused.value.field == field
    assert Record.objects.count() == 0


def test_a_closed_job_can_be_opened_again(job: Job, cast: Cast) -> None:
    close_job(record=job.record, why="finished", by=cast.by)
    job.refresh_from_db()
    assert job.closed_at is not None
    with pytest.raises(Refused):
        close_job(record=job.record, why="", by=cast.by)

    reopen_job(record=Record.objects.get(), why="a second phase", by=cast.by)
    job.refresh_from_db()
    assert job.closed_at is None


def test_a_new_name_leaves_the_old_one_in_the_record(job: Job, cast: Cast) -> None:
    describe_job(record=job.record, name="Clinic, wing B", place="", by=cast.by)

    job.refresh_from_db()
    assert (job.name, job.place) == ("Clinic, wing B", "")
    assert [e.kind for e in entries(job.record, thing="job")] == [
        "job opened",
        "job described",
    ]
