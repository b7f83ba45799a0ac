"""Requests, visits, handovers, holds: what may be done and what is refused."""

from __future__ import annotations

import uuid
from datetime import timedelta

import pytest
from django.utils import timezone

from jobs.actions import handovers, holds, requests, visits
from jobs.kinds.visits import PlannedTask
from jobs.models import Handover, Hold, Request, Visit
from stakes.kinds.checking import Judgement, StakeChecked
from stakes.models import Entry, Mark, Record
from stakes.queries.state import job_state
from stakes.record import Refused, append
from tests.builders import CHIEF, SURVEYOR, after, plan, row, set_stake
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> tuple[Cast, Record, list[uuid.UUID]]:
    """Two stakes set and checked by somebody independent."""
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record = job.record
    marks = plan(record, row("101", "1", "2"), row("102", "5", "6"))
    for mark in marks:
        set_stake(record, mark, None, after(1))
    append(
        record,
        StakeChecked(
            check=uuid.uuid4(),
            sort="position",
            listed=tuple(marks),
            components="pe",
            grade=2,
            reaches=("place",),
            judgement=Judgement(verdict="pass"),
        ),
        by=CHIEF,
        at=after(2),
    )
    return cast, record, marks


def ask(site, **more: object) -> uuid.UUID:
    cast, record, marks = site
    said = {"sort": "re-stake", "listed": marks, "words": "hit by a dozer", **more}
    return requests.make_request(
        record=record, company=cast.contractor.company, by=cast.by, **said
    )


def test_a_request_keeps_the_earliest_time_under_the_rule_and_promises_nothing(
    site,
) -> None:
    key = ask(site)
    request = Request.objects.get(key=key)
    assert request.earliest is not None
    assert request.earliest > request.received_at
    assert request.promised_for is None


def test_the_same_request_sent_twice_is_one(site) -> None:
    key = uuid.uuid4()
    assert ask(site, key=key) == ask(site, key=key) == key
    assert Request.objects.count() == 1


def test_a_request_for_a_mark_of_another_job_is_refused(site) -> None:
    with pytest.raises(Refused, match="not on this job"):
        ask(site, listed=[uuid.uuid4()])
    assert Request.objects.count() == 0


def test_a_telephone_number_stays_outside_the_hashed_words(site) -> None:
    ask(site, phone="555-0199")
    assert "555-0199" not in Entry.objects.latest("number").body


def test_a_request_runs_from_received_to_closed_by_its_handover(site) -> None:
    cast, record, marks = site
    key = ask(site)
    promised = timezone.now() + timedelta(days=3)
    requests.accept_request(
        record=record, ask=key, promised_for=promised, payer="contractor", by=cast.by
    )
    request = Request.objects.get(key=key)
    visit = visits.plan_visit(
        record=record,
        starts_at=promised,
        tasks=[visits.task_for(request)],
        by=cast.by,
    )
    assert Request.objects.get(key=key).state == "scheduled"
    assert Visit.objects.get(key=visit).tasks[0]["ask"] == str(key)
    handovers.hand_over(
        record=record,
        company=cast.contractor.company,
        listed=marks,
        signature="signed",
        to_whom="Superintendent",
        ask=key,
        visit=visit,
        by=cast.by,
    )
    assert Request.objects.get(key=key).state == "closed"
    assert job_state(record).marks[marks[0]].stake.handed_over


def test_what_is_over_cannot_be_decided_again(site) -> None:
    cast, record, _ = site
    key = ask(site)
    requests.decline_request(record=record, ask=key, reason="not our job", by=cast.by)
    with pytest.raises(Refused, match="declined already"):
        requests.accept_request(record=record, ask=key, by=cast.by)


def test_a_decline_without_a_reason_is_refused(site) -> None:
    cast, record, _ = site
    with pytest.raises(Refused, match="reason is missing"):
        requests.decline_request(record=record, ask=ask(site), reason=" ", by=cast.by)


def test_a_visit_without_a_task_or_ending_before_it_begins_is_refused(site) -> None:
    cast, record, _ = site
    now = timezone.now()
    with pytest.raises(Refused, match="no task"):
        visits.plan_visit(record=record, starts_at=now, by=cast.by)
    task = PlannedTask(task=uuid.uuid4(), sort="check")
    with pytest.raises(Refused, match="ends before"):
        visits.plan_visit(
            record=record, starts_at=now, ends_at=now, tasks=[task], by=cast.by
        )
    assert Visit.objects.count() == 0


def test_a_day_on_site_is_kept_with_its_waits_outcomes_and_ticket(site) -> None:
    cast, record, _ = site
    task = PlannedTask(task=uuid.uuid4(), sort="check", words="gridline A")
    visit = visits.plan_visit(
        record=record, starts_at=after(0), tasks=[task], by=cast.by, at=after(0)
    )
    visits.arrive(record=record, visit=visit, weather="rain", by=CHIEF, at=after(5))
    visits.stand_by(
        record=record,
        visit=visit,
        since=after(10),
        until=after(55),
        reason="access blocked",
        by=CHIEF,
        at=after(55),
    )
    with pytest.raises(Refused, match="name is missing"):
        visits.end_task(
            record=record, visit=visit, task=task.task, outcome="sent away", by=CHIEF
        )
    visits.end_task(
        record=record,
        visit=visit,
        task=task.task,
        outcome="site not ready",
        by=CHIEF,
        at=after(60),
    )
    with pytest.raises(Refused, match="name is missing"):
        visits.close_ticket(record=record, visit=visit, signature="signed", by=CHIEF)
    visits.close_ticket(record=record, visit=visit, signature="absent", by=CHIEF)
    visits.leave(record=record, visit=visit, by=CHIEF, at=after(70))
    stored = Visit.objects.get(key=visit)
    assert stored.standby_minutes == 45
    assert stored.tasks[0]["outcome"] == "site not ready"
    assert (stored.ticket, stored.left_at) == ("absent", after(70))
    with pytest.raises(Refused, match="over already"):
        visits.cancel_visit(record=record, visit=visit, reason="x", by=cast.by)


def test_handover_waits_for_what_is_lacking_but_never_refuses_what_was_done(
    site,
) -> None:
    cast, record, _ = site
    [loose] = plan(record, row("103", "9", "9"))
    set_stake(record, loose, None, after(3))
    given = {
        "record": record,
        "company": cast.contractor.company,
        "listed": [loose],
        "signature": "absent",
        "by": cast.by,
    }
    with pytest.raises(Refused, match="103 is not checked"):
        handovers.hand_over(**given)
    assert Handover.objects.count() == 0
    handovers.hand_over(**given, in_spite=True)
    assert "not checked" in Handover.objects.get().lacking[0]


def test_a_handover_is_answered_once(site) -> None:
    cast, record, marks = site
    key = handovers.hand_over(
        record=record,
        company=cast.contractor.company,
        listed=marks,
        signature="absent",
        left_with="site office",
        by=cast.by,
    )
    answer = {"record": record, "handover": key, "by": cast.by}
    handovers.answer_handover(**answer, acknowledged=True)
    with pytest.raises(Refused, match="acknowledged already"):
        handovers.answer_handover(**answer, acknowledged=False, words="no")


def test_a_hold_goes_to_whoever_holds_the_stakes_and_is_lifted_mark_by_mark(
    site,
) -> None:
    cast, record, marks = site
    handovers.hand_over(
        record=record,
        company=cast.contractor.company,
        listed=marks,
        signature="absent",
        by=cast.by,
    )
    hold = holds.send_hold(record=record, listed=marks, reason="CP3 moved", by=SURVEYOR)
    assert Hold.objects.get().companies == [str(cast.contractor.company.pk)]
    assert Mark.objects.filter(held=True).count() == 2
    holds.lift_hold(
        record=record, hold=hold, listed=marks[:1], reason="re-checked", by=SURVEYOR
    )
    assert Hold.objects.get().lifted_at is None
    holds.lift_hold(
        record=record, hold=hold, listed=marks, reason="re-checked", by=SURVEYOR
    )
    assert Hold.objects.get().lifted_at is not None
    assert not Mark.objects.filter(held=True).exists()
    with pytest.raises(Refused, match="under this hold"):
        holds.lift_hold(
            record=record, hold=hold, listed=marks, reason="again", by=SURVEYOR
        )
