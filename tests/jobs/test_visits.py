"""Visits: planned, moved, cancelled; a day on site with its waits, outcomes, ticket."""

from __future__ import annotations

import uuid
from datetime import timedelta

import pytest
from django.utils import timezone

from jobs.actions import visits
from jobs.kinds.visits import CrewArrived, CrewStoodBy, Member, PlannedTask
from jobs.models import Request, Visit
from jobs.queries.seats import asked
from jobs.queries.visits import tasks_seen, visits_seen
from stakes.record import Refused, append
from tests.builders import CHIEF, after
from tests.days import Site, make_site
from tests.jobs.cast import make_job

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


def task(words: str = "gridline A", **more: object) -> PlannedTask:
    return PlannedTask(task=uuid.uuid4(), sort="check", words=words, **more)  # type: ignore[arg-type]


def plan(site: Site, *tasks: PlannedTask, **more: object) -> uuid.UUID:
    said = {"starts_at": after(0), "by": site.cast.by, **more}
    return visits.plan_visit(record=site.record, tasks=tasks or [task()], **said)  # type: ignore[arg-type]


def test_a_visit_without_a_task_or_ending_before_it_begins_is_refused(
    site: Site,
) -> None:
    with pytest.raises(Refused, match="no task"):
        visits.plan_visit(record=site.record, starts_at=timezone.now(), by=site.cast.by)
    with pytest.raises(Refused, match="ends before"):
        plan(site, ends_at=after(0))
    assert Visit.objects.count() == 0


def test_marks_and_requests_of_another_job_cannot_be_put_on_a_visit(
    site: Site,
) -> None:
    before = site.entries
    with pytest.raises(Refused, match="not on this job"):
        plan(site, task(listed=(uuid.uuid4(),)))
    other = make_job("2699").record
    from jobs.actions.requests import make_request

    ask = make_request(
        record=other,
        company=site.cast.mason.company,
        sort="check",
        words="x",
        by=site.cast.by,
    )
    with pytest.raises(Refused, match="not on this job"):
        plan(site, task(ask=ask))
    assert site.entries == before


def test_a_plan_sent_twice_is_one_visit(site: Site) -> None:
    key, asks = uuid.uuid4(), site.asks()
    request = Request.objects.get(key=asks)
    first = plan(site, visits.task_for(request), key=key)
    assert plan(site, visits.task_for(request), key=key) == first == key
    assert Visit.objects.count() == 1


def test_a_visit_planned_anew_lets_go_of_requests_it_no_longer_answers(
    site: Site,
) -> None:
    ask = site.asks()
    other = task("gridline B")
    visit = plan(site, visits.task_for(Request.objects.get(key=ask)), other)
    plan(site, other, visit=visit, starts_at=after(600))
    stored = Visit.objects.get(key=visit)
    assert (stored.starts_at, len(stored.tasks)) == (after(600), 1)
    request = Request.objects.get(key=ask)
    assert (request.state, request.visit) == ("received", None)


def test_a_visit_that_is_over_or_cancelled_is_not_planned_anew(site: Site) -> None:
    visit = plan(site)
    visits.cancel_visit(record=site.record, visit=visit, reason="rain", by=CHIEF)
    for again in (
        lambda: plan(site, visit=visit),
        lambda: visits.cancel_visit(
            record=site.record, visit=visit, reason="again", by=CHIEF
        ),
    ):
        with pytest.raises(Refused, match="cancelled already"):
            again()


def test_a_day_on_site_is_kept_with_its_waits_outcomes_and_ticket(site: Site) -> None:
    the_task = task()
    visit = plan(site, the_task)
    here = {"record": site.record, "visit": visit, "by": CHIEF}
    visits.arrive(
        **here, members=[Member(person="", name="Rod", duty="rod")], weather="rain"
    )
    visits.stand_by(
        **here, since=after(10), until=after(55), reason="access blocked", at=after(55)
    )
    visits.end_task(**here, task=the_task.task, outcome="site not ready", at=after(60))
    visits.close_ticket(**here, signature="absent")
    visits.leave(**here, at=after(70))
    stored = Visit.objects.get(key=visit)
    assert (stored.standby_minutes, stored.weather) == (45, "rain")
    assert stored.tasks[0]["outcome"] == "site not ready"
    assert (stored.ticket, stored.left_at) == ("absent", after(70))


def test_what_was_done_twice_by_gloves_is_recorded_once(site: Site) -> None:
    visit, key = plan(site), uuid.uuid4()
    before = site.entries
    for _ in range(2):
        visits.arrive(record=site.record, visit=visit, weather="dry", key=key, by=CHIEF)
    assert site.entries == before + 1


@pytest.mark.parametrize(
    "act, words",
    [
        (lambda v, t: visits.end_task(**v, task=t, outcome="sent away"), "name"),
        (lambda v, t: visits.end_task(**v, task=uuid.uuid4(), outcome="done"), "task"),
        (lambda v, t: visits.close_ticket(**v, signature="signed"), "name"),
        (
            lambda v, t: visits.close_ticket(**v, signature="declined", signed_by="S"),
            "reason",
        ),
        (
            lambda v, t: visits.stand_by(
                **v, since=after(5), until=after(5), reason="x"
            ),
            "ends before",
        ),
        (
            lambda v, t: visits.stand_by(
                **v, since=after(0), until=after(3000), reason="x"
            ),
            "longer than a day",
        ),
        (lambda v, t: visits.arrive(**v, weather="x" * 201), "201"),
        (lambda v, t: visits.leave(**{**v, "visit": uuid.uuid4()}), "no such visit"),
    ],
)
def test_what_lacks_a_word_or_cannot_be_is_refused_and_nothing_is_written(
    site: Site, act, words: str
) -> None:
    the_task = task()
    visit = {"record": site.record, "visit": plan(site, the_task), "by": CHIEF}
    before = site.entries
    with pytest.raises(Refused, match=words):
        act(visit, the_task.task)
    assert site.entries == before


def test_a_fold_bears_what_a_program_sends_however_long_or_wrong(site: Site) -> None:
    visit = plan(site)
    append(site.record, CrewArrived(visit=visit, weather="x" * 5000), by=CHIEF)
    append(
        site.record,
        CrewStoodBy(visit=visit, since=after(0), until=after(10**8), reason="a slip"),
        by=CHIEF,
    )
    stored = Visit.objects.get(key=visit)
    assert len(stored.weather) == 200
    assert stored.standby_minutes == 100_000


def test_a_company_sees_every_visit_that_answered_it_and_only_its_own_tasks(
    site: Site,
) -> None:
    own, masons = site.asks(), site.asks(site.cast.mason, words="for the masons")
    tasks = [visits.task_for(r) for r in Request.objects.filter(key__in=[own, masons])]
    first = plan(site, *tasks)
    again = plan(site, *[t for t in tasks if t.ask == own], starts_at=after(900))
    masons_only = plan(site, *[t for t in tasks if t.ask == masons])
    reader = asked(site.record, site.cast.contractor, job_name="")
    assert {v.key for v in visits_seen(reader)} == {first, again}
    [(_, seen)] = tasks_seen(reader, Visit.objects.filter(key=first))
    assert [t["ask"] for t in seen] == [str(own)]
    assert masons_only not in {v.key for v in visits_seen(reader)}


def test_a_subcontracted_crew_sees_the_visits_it_is_on(site: Site) -> None:
    crew = site.cast.subcontractor
    on = plan(site, members=[Member(person=str(crew.pk), name=crew.name)])
    plan(site, starts_at=after(0) + timedelta(days=1))
    reader = asked(site.record, crew, job_name="")
    assert [v.key for v in visits_seen(reader)] == [on]
