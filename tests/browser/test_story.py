"""The whole story with all its people: from an empty job to the acknowledged re-stake.

Each page that is passed is looked at by axe and must fit its screen.
"""

from __future__ import annotations

import re
from datetime import datetime, timedelta
from typing import Any

import pytest

from jobs.models import Handover, Request
from stakes.models import Mark, Record
from stakes.queries.state import job_state
from stakes.record.folds import replay
from stakes.record.proving import faults
from tests.browser.conftest import Visitors, looks_right
from tests.jobs.cast import make_cast

PASSWORD = "a-long-password-of-tests"
CONTROL = (
    ("CP1", "1130", "5000"),
    ("CP2", "1135", "5210"),
    ("CP3", "1010", "5215"),
    ("CP4", "1000", "5005"),
)
STAKES = tuple(
    (str(101 + i), str(1020 + 20 * (i // 4)), str(5060 + 25 * (i % 4)))
    for i in range(8)
)


@pytest.fixture
def people(db: None) -> dict[str, str]:
    """The firm's people and the contractor's, each with a password; no job yet."""
    cast = make_cast()
    for user in cast.everybody.values():
        user.set_password(PASSWORD)
        user.save()
    return {role: user.email for role, user in cast.everybody.items()}


def go_on(page: Any, name: str) -> None:
    """Press a button and see that it was taken."""
    page.get_by_role("button", name=name).first.click()
    page.wait_for_load_state("networkidle")
    wrong = page.locator(".errors, .wrong").all_inner_texts()
    assert not wrong, (page.url, wrong)


def open_job(page: Any) -> None:
    page.goto("/jobs/open/")
    looks_right(page)
    page.get_by_label("Job number").fill("2614")
    page.get_by_label("Name", exact=True).first.fill("Clinic")
    page.locator("input[name=unit][value=ft]").check()
    page.get_by_label("Time zone").select_option("America/Chicago")
    go_on(page, "Open")


def give_seat(page: Any, person: str, role: str) -> None:
    page.goto("/jobs/2614/people/give/")
    option = page.locator("#id_person option", has_text=person).first
    page.get_by_label("Person").select_option(option.get_attribute("value"))
    page.get_by_label(role, exact=True).check()
    go_on(page, "Give it")


def type_marks(page: Any, rows: Any, purpose: str, title: str) -> None:
    page.goto("/jobs/2614/marks/add/")
    looks_right(page)
    page.locator("#id_title").fill(title)
    page.locator("#id_purpose").select_option(purpose)
    while page.locator(f"input[aria-label$='row {len(rows)}']").count() == 0:
        page.get_by_role("button", name="More rows").click()
    for number, (label, north, east) in enumerate(rows, start=1):
        for column, text in (("Number", label), ("Northing", north), ("Easting", east)):
            page.get_by_label(f"{column}, row {number}", exact=True).fill(text)
        page.get_by_label(f"Carries, row {number}", exact=True).select_option(
            "position"
        )
    go_on(page, "Keep as a draft")


def draft_address(page: Any) -> str:
    found = re.search(r"/plan/drafts/[0-9a-f-]{36}/", page.url)
    assert found, page.url
    return f"/jobs/2614{found[0]}"


def check_and_issue(surveyor: Any, address: str, *, adopt: bool) -> None:
    surveyor.goto(f"{address}check/")
    looks_right(surveyor)
    surveyor.locator("#id_how").fill("read back from the sheet")
    go_on(surveyor, "Checked")
    surveyor.goto(f"{address}issue/")
    looks_right(surveyor)
    if adopt:
        box = surveyor.locator("#id_adopt")
        if box.count():
            box.check()
        surveyor.locator("#id_source").fill("control sheet S-001")
    go_on(surveyor, "Issue")


def test_from_an_empty_job_to_the_acknowledged_re_stake(
    people: dict[str, str], visitor: Visitors
) -> None:
    manager = visitor.page(people["manager"], PASSWORD)
    looks_right(manager)
    open_job(manager)
    looks_right(manager)
    give_seat(manager, "Party Chief", "Party chief")
    give_seat(manager, "Superintendent", "Contractor")
    give_seat(manager, "Auditor", "Auditor")

    surveyor = visitor.page(people["surveyor"], PASSWORD)
    for rows, purpose, title in (
        (CONTROL, "control", "Control"),
        (STAKES, "stake", "Building stakes"),
    ):
        type_marks(manager, rows, purpose, title)
        check_and_issue(surveyor, draft_address(manager), adopt=purpose == "control")
    record = Record.objects.get(number="2614")
    assert Mark.objects.filter(record=record).count() == 12

    chief = visitor.page(people["party_chief"], PASSWORD, phone=True)
    chief.goto("/field/2614/")
    looks_right(chief)
    the_ground_may_not_be_broken_yet(chief, record)
    set_up(chief, record)
    set_and_lose(chief, record, "106")

    contractor = visitor.page(people["contractor"], PASSWORD)
    ask_for(contractor, "106")
    decide_and_plan(manager)
    put_back(chief, record, "106")
    hand_over(chief)
    acknowledge(contractor)
    read_it_all(visitor, people["auditor"], record)

    assert Request.objects.get().state == "closed"
    assert Handover.objects.get().answer == "acknowledged"
    record.refresh_from_db()
    assert faults(record) == []
    assert replay(record) == []


def the_ground_may_not_be_broken_yet(chief: Any, record: Record) -> None:
    """Without a valid locate the set page stops; the ticket is recorded first."""
    mark = Mark.objects.get(record=record, label="106")
    chief.goto(f"/field/2614/marks/{mark.key}/set/")
    looks_right(chief)
    assert "utilities are located" in chief.content()
    assert chief.get_by_role("button", name="Go on, held").count() == 0
    chief.get_by_role("link", name="Record the locate ticket").click()
    chief.goto("/field/2614/locates/record/")
    looks_right(chief)
    chief.get_by_label("Ticket number").fill("L-1")
    chief.locator("#id_whose").fill("one-call centre")
    chief.locator("#id_area").fill("the whole lot")
    chief.locator("#id_valid_from").fill("2026-01-01T07:00")
    chief.locator("#id_valid_to").fill("2099-01-01T17:00")
    chief.locator("input[name=private_lines][value=marked]").check()
    chief.locator("#id_private_by").fill("general contractor")
    chief.locator("form .verbs button.main").click()
    chief.wait_for_load_state("networkidle")
    assert not chief.locator(".errors").all_inner_texts()


def set_up(chief: Any, record: Record) -> None:
    """A total station on CP1, oriented on CP2, checked on CP4."""
    chief.goto("/field/2614/setups/open/station/")
    looks_right(chief)
    key = {m.label: str(m.key) for m in Mark.objects.filter(record=record)}
    chief.locator("#id_occupied").select_option(key["CP1"])
    chief.locator("#id_oriented_on").select_option(key["CP2"])
    chief.locator("#id_check1_mark").fill("CP4")
    chief.locator("input[name=check1_by][value=distance]").check()
    chief.locator("#id_check1_measured").fill("130.10")
    go_on(chief, "Open it")
    _past_the_gate(chief)
    looks_right(chief)


def _past_the_gate(page: Any) -> None:
    """What was done already is always heard."""
    button = page.get_by_role("button", name="Record what was done")
    if button.count():
        looks_right(page)
        button.click()
        page.wait_for_load_state("networkidle")


def set_and_lose(chief: Any, record: Record, label: str) -> None:
    mark = Mark.objects.get(record=record, label=label)
    chief.goto(f"/field/2614/marks/{mark.key}/set/")
    _past_the_gate(chief)
    looks_right(chief)
    for box in chief.locator("input[name=acknowledged]").all():
        box.check()
    chief.locator("input[name=setup]").first.check()
    chief.locator("input[name=holds]").first.check()
    chief.locator("form .verbs button.main").click()
    chief.wait_for_load_state("networkidle")
    _past_the_gate(chief)
    assert job_state(record).by_label[label].standing == "standing"
    chief.goto(f"/field/2614/found/gone/?mark={mark.key}")
    looks_right(chief)
    go_on(chief, "Record")
    assert job_state(record).by_label[label].standing == "gone"


def ask_for(contractor: Any, label: str) -> None:
    contractor.goto("/jobs/2614/plan/")
    looks_right(contractor)
    contractor.goto("/jobs/2614/requests/make/")
    looks_right(contractor)
    contractor.get_by_label("Which marks").fill(label)
    contractor.get_by_label("In your words").fill("hit by the loader this morning")
    go_on(contractor, "Send the request")
    looks_right(contractor)
    assert "Only the manager" in contractor.content()


def decide_and_plan(manager: Any) -> None:
    manager.goto("/jobs/2614/requests/")
    looks_right(manager)
    manager.locator("h2 a").first.click()
    manager.get_by_role("link", name="Accept", exact=True).click()
    looks_right(manager)
    manager.get_by_label("Promised for").fill(in_three_weeks())
    go_on(manager, "Accept it")
    manager.get_by_role("link", name="Put it on a visit").click()
    looks_right(manager)
    manager.get_by_label("From", exact=True).fill(in_three_weeks())
    go_on(manager, "Plan it")
    looks_right(manager)


def in_three_weeks() -> str:
    """A morning to come, as the device's own control writes it."""
    return f"{datetime.now() + timedelta(weeks=3):%Y-%m-%d}T08:00"


def put_back(chief: Any, record: Record, label: str) -> None:
    chief.goto("/jobs/2614/lost/")
    looks_right(chief)
    chief.get_by_role("link", name=re.compile(label)).click()
    looks_right(chief)
    chief.get_by_role("link", name="Put it back this way").first.click()
    looks_right(chief)
    expected = re.search(r"expect ([\d.]+) ft", chief.content())
    assert expected
    chief.get_by_label(re.compile("The check measured")).fill(expected[1])
    chief.get_by_label("Not found").check()
    chief.get_by_label(re.compile("reason|Why this way")).fill("nearest control")
    chief.get_by_role("button", name="Record it put back").click()
    chief.wait_for_load_state("networkidle")
    _past_the_gate(chief)
    looks_right(chief)
    assert job_state(record).by_label[label].stake.ordinal == 2


def hand_over(chief: Any) -> None:
    ask = Request.objects.get()
    chief.goto(f"/jobs/2614/handovers/make/?ask={ask.key}")
    looks_right(chief)
    chief.get_by_label("Nobody was there").check()
    chief.get_by_label("Left with, or sent to").fill("site office")
    chief.get_by_label(re.compile("in spite")).check()
    go_on(chief, "Record the handover")
    looks_right(chief)


def acknowledge(contractor: Any) -> None:
    contractor.goto("/jobs/2614/handovers/")
    looks_right(contractor)
    contractor.locator("th a").first.click()
    contractor.get_by_role("link", name="Acknowledge or decline").click()
    looks_right(contractor)
    contractor.get_by_label("We received them").check()
    go_on(contractor, "Record the answer")


def read_it_all(visitor: Visitors, email: str, record: Record) -> None:
    """The auditor reads the mark's life, the record and an entry, on both sizes."""
    mark = Mark.objects.get(record=record, label="106")
    for phone in (False, True):
        auditor = visitor.page(email, PASSWORD, phone=phone)
        for address in (
            "/",
            "/jobs/2614/",
            "/jobs/2614/plan/",
            "/jobs/2614/marks/",
            f"/jobs/2614/marks/{mark.key}/",
            "/jobs/2614/record/",
            "/jobs/2614/record/1/",
            "/jobs/2614/visits/",
            "/jobs/2614/holds/",
            "/jobs/2614/control/",
            "/jobs/2614/sheets/",
        ):
            auditor.goto(address)
            looks_right(auditor)
        auditor.goto(f"/jobs/2614/marks/{mark.key}/")
        text = auditor.content()
        assert "Found missing" in text
        assert "put back by" in text
