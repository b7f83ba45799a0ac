"""A plan is drafted, checked by another person, issued; what moved is superseded."""

from __future__ import annotations

import uuid

import pytest

from stakes.actions.issuing import (
    Adoption,
    RowsRefused,
    check_plan,
    issue_plan,
    leave_draft,
    plan_marks,
)
from stakes.exchange.rows import from_data
from stakes.models import Draft, Entry, Mark, Record
from stakes.queries.plan import changes, known_marks, superseded_standing
from stakes.queries.state import job_state
from stakes.record import By, Refused
from tests.builders import CHIEF, SURVEYOR, after, make_record, set_stake

pytestmark = pytest.mark.django_db

CLERK = By(person="clerk", name="Office clerk")


def stake(label: str, n: str = "1050.00", e: str = "2100.00", **more: str):
    return {"label": label, "northing": n, "easting": e, **more}


def drafted(record: Record, *rows, **more) -> Draft:
    return plan_marks(record=record, rows=rows, title="Footings", by=CLERK, **more)


def issued(record: Record, *rows, adopt: Adoption | None = None) -> list[Entry]:
    draft = drafted(record, *rows)
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="dimensions added up")
    return issue_plan(record=record, draft=draft.key, by=SURVEYOR, adopt=adopt)


def test_a_draft_is_no_part_of_the_record_until_it_is_issued() -> None:
    record = make_record()
    draft = drafted(record, stake("101"), stake("102", "1060"))
    assert not Mark.objects.exists()
    assert not Entry.objects.exists()
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="second sheet")
    issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert sorted(Mark.objects.values_list("label", flat=True)) == ["101", "102"]
    assert Mark.objects.get(label="101").carries == "position"


def test_who_computed_a_draft_does_not_check_it_unless_alone() -> None:
    record = make_record()
    draft = drafted(record, stake("101"))
    with pytest.raises(Refused, match="computed this draft"):
        check_plan(record=record, draft=draft.key, by=CLERK, how="looked again")
    check_plan(record=record, draft=draft.key, by=CLERK, how="looked again", alone=True)
    entries = issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert "alone" in entries[0].body


def test_an_unchecked_draft_is_not_issued() -> None:
    record = make_record()
    draft = drafted(record, stake("101"))
    with pytest.raises(Refused, match="Nobody has checked"):
        issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert not Entry.objects.exists()


def test_issuing_twice_is_one_act() -> None:
    record = make_record()
    draft = drafted(record, stake("101"))
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="second sheet")
    first = issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    again = issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert [e.number for e in first] == [e.number for e in again]
    assert Entry.objects.count() == 1


def test_a_form_sent_twice_makes_one_draft() -> None:
    record, key = make_record(), uuid.uuid4()
    assert drafted(record, stake("101"), key=key) == drafted(
        record, stake("101"), key=key
    )
    with pytest.raises(Refused, match="sent before"):
        drafted(record, stake("102"), key=key)
    assert Draft.objects.count() == 1


def test_issuing_control_can_adopt_its_values_with_their_source() -> None:
    record = make_record()
    rows = [
        stake("CP1", "1000", "2000", elevation="500", purpose="control"),
        {"label": "BM1", "elevation": "500.25", "purpose": "benchmark"},
    ]
    entries = issued(record, *rows, adopt=Adoption("city network", position_mm=3.0))
    assert [e.kind for e in entries] == ["planned", "value adopted", "value adopted"]
    control = job_state(record).by_label["CP1"]
    assert control.plan.value is not None
    assert control.plan.covariance_mm2["nn"] == "9"
    assert str(control.standing) == "standing"


def test_control_without_a_source_is_not_adopted() -> None:
    record = make_record()
    with pytest.raises(Refused, match="where the values of the control come from"):
        issued(record, stake("CP1", purpose="control"), adopt=Adoption(" "))
    assert not Entry.objects.exists()


def test_a_known_number_issued_elsewhere_says_how_far_it_moved_and_supersedes() -> None:
    record = make_record()
    issued(record, stake("101"), stake("102", "1060"))
    mark = Mark.objects.get(label="101").key
    set_stake(record, mark, None, after(60), holds="hub and tack")
    draft = drafted(record, stake("101", "1050.30", "2100.40"), stake("102", "1060"))
    told = changes(from_data(draft.rows), known_marks(record), record.length_unit)
    assert [c.what for c in told] == ["moved", "same"]
    assert told[0].across.text == "0.500"
    assert (told[0].north.text, told[0].east.text) == ("0.300", "0.400")
    assert told[0].supersedes
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="new sheet")
    issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert job_state(record).marks[mark].stake.superseded
    assert superseded_standing(record) == [(mark, "101")]
    assert Mark.objects.count() == 2


@pytest.mark.parametrize(
    "rows, words",
    [
        ([stake("101"), stake("101", "1")], "101 stands in rows 1 and 2"),
        ([stake("101"), stake("1O1", "1")], "1O1 looks like 101"),
        ([stake("101"), stake("l01", "1")], "l01 looks like 101"),
        ([stake("a7"), stake("A7", "1")], "A7 looks like a7"),
        ([stake("7"), stake("007", "1")], "007 looks like 7"),
        ([stake("101", e="")], "easting is missing"),
        ([stake("101", carries="both")], "elevation is missing"),
        ([{"label": "BM1", "purpose": "benchmark"}], "elevation is missing"),
        ([stake("")], "no number"),
        ([stake("101", n="north")], "northing cannot be read"),
        ([stake("101", n="1e400")], "northing"),
        ([stake("101", purpose="totem")], "is no purpose"),
        ([stake("9" * 61)], "61 letters"),
        ([stake("101", sort="property corner")], "legal monument"),
        ([], "no row"),
        ([stake(str(n)) for n in range(1001)], "1001 rows"),
    ],
)
def test_rows_that_cannot_stand_are_refused_with_a_sentence(rows, words) -> None:
    record = make_record()
    with pytest.raises(Refused) as refused:
        drafted(record, *rows)
    said = str(refused.value)
    if isinstance(refused.value, RowsRefused):
        said += " ".join(c.sentence for c in refused.value.complaints)
    assert words in said
    assert not Draft.objects.exists()
    assert not Entry.objects.exists()


@pytest.mark.parametrize(
    "again, words",
    [
        (stake("CP1", "1001", "2000", purpose="control"), "never moved by a plan"),
        (stake("CP1"), "is control on this job"),
        (stake("1O1"), "this job has already"),
        (stake("101", stage="finish"), "needs a number of its own"),
    ],
)
def test_a_number_the_job_has_already_is_not_used_for_something_else(
    again, words
) -> None:
    record = make_record()
    issued(record, stake("101"), stake("CP1", "1000", "2000", purpose="control"))
    with pytest.raises(RowsRefused) as refused:
        drafted(record, again)
    assert words in " ".join(c.what for c in refused.value.complaints)


def test_a_draft_overtaken_by_another_plan_is_refused_whole() -> None:
    record = make_record()
    late = drafted(record, stake("101"), stake("7", "1", "1"))
    issued(record, stake("007", "5", "5"))
    check_plan(record=record, draft=late.key, by=SURVEYOR, how="second sheet")
    with pytest.raises(RowsRefused, match="has changed since"):
        issue_plan(record=record, draft=late.key, by=SURVEYOR)
    assert list(Mark.objects.values_list("label", flat=True)) == ["007"]


def test_a_draft_with_nothing_new_is_not_issued() -> None:
    record = make_record()
    issued(record, stake("101"))
    with pytest.raises(Refused, match="just so"):
        issued(record, stake("101"))


def test_a_draft_put_aside_cannot_be_issued() -> None:
    record = make_record()
    draft = drafted(record, stake("101"))
    leave_draft(record=record, draft=draft.key, by=CHIEF)
    with pytest.raises(Refused, match="left already"):
        check_plan(record=record, draft=draft.key, by=SURVEYOR, how="x")


def test_a_draft_of_another_job_is_not_found() -> None:
    here, there = make_record("1"), make_record("2")
    draft = drafted(there, stake("101"))
    with pytest.raises(Refused, match="no such draft"):
        check_plan(record=here, draft=draft.key, by=SURVEYOR, how="x")
