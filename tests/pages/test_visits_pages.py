"""Visits over HTTP: planned, moved, on site by phone, the ticket; refused in words."""

from __future__ import annotations

import uuid
from datetime import timedelta

import pytest
from django.utils import timezone

from jobs.actions import visits
from jobs.kinds.visits import PlannedTask
from jobs.models import Crew, Request, Visit
from stakes.actions.condition import see_marks
from tests.days import Site, make_site

pytestmark = pytest.mark.django_db
DAY = timezone.now().date() + timedelta(days=8)


@pytest.fixture
def site() -> Site:
    return make_site()


@pytest.fixture
def visit(site: Site) -> uuid.UUID:
    return visits.plan_visit(
        record=site.record,
        starts_at=timezone.now(),
        tasks=[
            PlannedTask(
                task=uuid.uuid4(),
                sort="check",
                words="gridline A",
                listed=tuple(site.marks),
            )
        ],
        words="Zebrawood Masonry is in the way",
        by=site.cast.by,
    )


def crew_of(site: Site) -> Crew:
    crew = Crew.objects.create(
        name="Crew 1",
        company=site.cast.party_chief.company,
        party_chief=site.cast.party_chief,
    )
    crew.members.add(site.cast.crew)
    return crew


def test_the_manager_plans_a_visit_that_its_crew_finds_on_the_start_page(
    site: Site,
) -> None:
    ask, crew = site.asks(), crew_of(site)
    there = timezone.now().astimezone(site.record.time_zone)
    said = {"starts_at": f"{there:%Y-%m-%dT%H:%M}", "crew": str(crew.pk)}
    answer = site.send("manager", "visit-plan", **said, requests=[str(ask)])
    assert answer.status_code == 303
    one = Visit.objects.get()
    assert [m["name"] for m in one.members] == ["Party Chief", "Rod Person"]
    assert site.url("visit", one.key) in site.as_("crew").get("/").content.decode()


def test_a_visit_is_moved_with_its_tasks_and_what_is_unticked_waits_again(
    site: Site,
) -> None:
    ask = site.asks()
    said = {"starts_at": f"{DAY}T08:00", "requests": [str(ask)], "sort": "control"}
    site.send("manager", "visit-plan", **said)
    one = Visit.objects.get()
    page = site.page("manager", "visit-move", one.key)
    assert f"{DAY}T08:00" in page
    kept = [t["task"] for t in one.tasks if t["sort"] == "control"]
    moved = {"starts_at": f"{DAY}T13:00", "tasks": kept}
    assert site.send("manager", "visit-move", one.key, **moved).status_code == 303
    one = Visit.objects.get()
    assert [t["task"] for t in one.tasks] == kept
    assert one.starts_at.astimezone(site.record.time_zone).hour == 13
    assert Request.objects.get(key=ask).state == "received"


@pytest.mark.parametrize(
    "sent, words",
    [
        ({}, "no task"),
        ({"sort": "check", "starts_at": ""}, "required"),
        ({"sort": "check", "ends_at": f"{DAY}T07:00"}, "ends before"),
        ({"sort": "check", "listed": "999"}, "There is no mark"),
        ({"sort": "demolish"}, "valid choice"),
        ({"requests": [str(uuid.uuid4())]}, "valid choice"),
        ({"requests": ["' OR 1=1"]}, "valid"),
        ({"sort": "check", "words": "x" * 5000}, "at most 1000"),
        ({"sort": "check", "crew": "nobody"}, "valid"),
    ],
)
def test_a_bad_plan_gets_a_sentence_and_changes_nothing(
    site: Site, sent: dict, words: str
) -> None:
    before = site.entries
    sent = {"starts_at": f"{DAY}T08:00", **sent}
    answer = site.send("manager", "visit-plan", **sent)
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert site.entries == before


def test_a_day_on_site_by_phone(site: Site, visit: uuid.UUID) -> None:
    page = site.page("party_chief", "visit", visit)
    assert 'class="field"' in page
    assert f"/field/{site.record.number}/?visit={visit}" in page
    arrived = {"members": "Ann, rod\n\nBob", "instruments": "level, 12, two pegs"}
    site.send("party_chief", "visit-arrive", visit, **arrived)
    see_marks(
        record=site.record,
        marks=site.marks[:1],
        condition="undisturbed",
        occasion=visit,
        by=site.cast.by,
    )
    task = Visit.objects.get().tasks[0]["task"]
    site.send("party_chief", "task-end", visit, task, outcome="site not ready")
    ticket = site.page("party_chief", "ticket-close", visit)
    for words in ("gridline A", "site not ready", "What was recorded", "101"):
        assert words in ticket
    closed = {"signature": "signed", "signed_by": "Superintendent"}
    site.send("party_chief", "ticket-close", visit, **closed)
    site.send("party_chief", "visit-leave", visit)
    one = Visit.objects.get()
    assert (one.ticket, one.ticket_by) == ("signed", "Superintendent")
    assert one.left_at is not None


@pytest.mark.parametrize(
    "name, sent, words",
    [
        ("visit-wait", {"reason": "x"}, "required"),
        (
            "visit-wait",
            {"since": "2026-03-02T10:00", "until": "2026-03-02T09:00", "reason": "x"},
            "ends before",
        ),
        ("visit-arrive", {"at": "2099-01-01T08:00"}, "future"),
        ("visit-arrive", {"instruments": "x" * 400}, "400 characters"),
        ("ticket-close", {"signature": "signed"}, "name is missing"),
        ("ticket-close", {"signature": "forged"}, "valid choice"),
        ("visit-cancel", {}, "required"),
    ],
)
def test_what_is_missing_on_site_is_said_and_nothing_is_written(
    site: Site, visit: uuid.UUID, name: str, sent: dict, words: str
) -> None:
    before = site.entries
    who = "manager" if name == "visit-cancel" else "party_chief"
    answer = site.send(who, name, visit, **sent)
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert site.entries == before


def test_a_visit_is_planned_and_recorded_only_by_whoever_may(
    site: Site, visit: uuid.UUID
) -> None:
    before = site.entries
    for who in ("surveyor", "party_chief", "contractor", "auditor"):
        assert site.send(who, "visit-plan").status_code == 403
        assert site.send(who, "visit-cancel", visit, reason="x").status_code == 403
    for who in ("contractor", "auditor"):
        assert site.send(who, "visit-arrive", visit).status_code == 403
    assert site.entries == before


def test_a_contractor_reads_neither_others_visits_nor_the_words_to_the_crew(
    site: Site, visit: uuid.UUID
) -> None:
    assert site.as_("contractor").get(site.url("visit", visit)).status_code == 404
    ask = site.asks()
    masons = site.asks(site.cast.mason, words="for the masons alone")
    own = visits.plan_visit(
        record=site.record,
        starts_at=timezone.now(),
        tasks=[
            visits.task_for(r) for r in Request.objects.filter(key__in=(ask, masons))
        ],
        words="ring Zebrawood Masonry first",
        by=site.cast.by,
    )
    page = site.page("contractor", "visit", own)
    assert "hit by a dozer" in page
    assert "masons alone" not in page
    assert "Zebrawood" not in page
    assert "Zebrawood" in site.page("crew", "visit", own)


def test_an_unknown_visit_or_task_is_not_found(site: Site, visit: uuid.UUID) -> None:
    chief = site.as_("party_chief")
    assert chief.get(site.url("visit", uuid.uuid4())).status_code == 404
    assert chief.get(site.url("task-end", visit, uuid.uuid4())).status_code == 404
