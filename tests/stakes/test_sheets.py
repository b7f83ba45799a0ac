"""Sheets are received, read and sorted; questions and directions hold their marks."""

from __future__ import annotations

import hashlib
import io
import uuid

import pytest

from stakes.actions.questions import (
    answer_question,
    ask_question,
    give_direction,
    settle_direction,
)
from stakes.actions.sheets import (
    MOST_BYTES,
    file_of,
    keep_file,
    read_sheet,
    receive_sheet,
)
from stakes.models import Entry, Mark, Sheet
from stakes.queries import held_by
from stakes.queries.sheets import held, moved_with, sheet_lines
from stakes.record import Refused
from tests.builders import SURVEYOR, after, make_record, plan, row

pytestmark = pytest.mark.django_db


class File(io.BytesIO):
    def __init__(self, data: bytes, size: int | None = None) -> None:
        super().__init__(data)
        self.name, self.size = "A-101.pdf", len(data) if size is None else size


@pytest.fixture
def job():
    record = make_record()
    marks = plan(record, row("101", "1", "1"), row("102", "1", "9"))
    return record, marks


def received(record, number="A-101", revision="1", **more) -> uuid.UUID:
    said = {"status": "for construction", "by": SURVEYOR, "at": after(60), **more}
    return receive_sheet(record=record, number=number, revision=revision, **said)


def test_a_revision_holds_every_mark_until_it_is_sorted(job) -> None:
    record, (one, two) = job
    old = received(record, touched=[one])
    new = received(record, revision="2", replaces=old, at=after(90))
    rows = {m.key: m for m in Mark.objects.all()}
    assert len(held_by.newer_sheets(record, rows[two], after(100))) == 1
    read_sheet(record=record, sheet=new, sorted_to=[one], by=SURVEYOR, at=after(95))
    assert held_by.newer_sheets(record, rows[two], after(100)) == []
    assert str(Sheet.objects.get(key=old).replaced_by) == str(new)
    lines = {line.sheet.revision: line for line in sheet_lines(record)}
    assert not lines["1"].is_current
    assert [label for _, label in lines["2"].marks] == ["101"]
    assert lines["2"].waits == ""


def test_a_sheet_says_who_read_it(job) -> None:
    record, _ = job
    sheet = received(record)
    assert sheet_lines(record)[0].waits == "nobody has read it"
    read_sheet(record=record, sheet=sheet, changes_nothing=True, by=SURVEYOR)
    assert Sheet.objects.get().read_by[0]["name"] == "Licensed surveyor"


def test_a_question_holds_its_marks_until_it_is_answered(job) -> None:
    record, (one, _) = job
    question = ask_question(
        record=record,
        words="Grid B to the property line: no dimension",
        to_whom="Architect",
        holds=[one],
        by=SURVEYOR,
        at=after(10),
    )
    assert len(held_by.questions(record, one, after(20))) == 1
    assert [label for _, label in held(record)[0][0].marks] == ["101"]
    said = {"record": record, "question": question, "by": SURVEYOR}
    answer_question(words="12.50", by_whom="Architect", at=after(30), **said)
    assert held_by.questions(record, one, after(40)) == []
    with pytest.raises(Refused, match="answered by Architect already"):
        answer_question(words="12.60", by_whom="Architect", **said)


def test_a_verbal_direction_holds_until_it_is_confirmed(job) -> None:
    record, (one, _) = job
    direction = give_direction(
        record=record,
        words="Move the wall half a foot",
        by_whom="Superintendent",
        to_whom="Party chief",
        holds=[one],
        by=SURVEYOR,
        at=after(10),
    )
    assert len(held_by.directions(record, one, after(20))) == 1
    said = {"record": record, "direction": direction, "by": SURVEYOR}
    with pytest.raises(Refused, match="which writing"):
        settle_direction(confirmed=True, **said)
    settle_direction(confirmed=False, words="not followed", at=after(30), **said)
    assert held_by.directions(record, one, after(40)) == []


@pytest.mark.parametrize(
    "more, words",
    [
        ({"number": " "}, "no number"),
        ({"revision": ""}, "no revision"),
        ({"status": "maybe"}, "no status"),
        ({"number": "x" * 61}, "61 letters"),
        ({"number": "a-101", "revision": "1"}, "received already"),
        ({"touched": [uuid.uuid4()]}, "not on this job"),
        ({"replaces": uuid.uuid4()}, "no such sheet"),
    ],
)
def test_a_sheet_that_cannot_be_received_gets_a_sentence(job, more, words) -> None:
    record, _ = job
    received(record)
    before = Entry.objects.count()
    with pytest.raises(Refused, match=words):
        received(record, **{"number": "B-1", "revision": "1", **more})
    assert Entry.objects.count() == before


def test_the_file_is_kept_as_received_under_its_hash(settings, tmp_path) -> None:
    settings.DATA_DIR = tmp_path
    sha256 = keep_file(File(b"a drawing"))
    assert sha256 == hashlib.sha256(b"a drawing").hexdigest()
    assert file_of(sha256).read_bytes() == b"a drawing"
    assert keep_file(File(b"a drawing")) == sha256
    for bad in (File(b""), File(b"x", MOST_BYTES + 1)):
        with pytest.raises(Refused):
            keep_file(bad)
    assert len(list((tmp_path / "sheets").rglob("*"))) == 2


def test_a_form_sent_twice_receives_one_sheet(job) -> None:
    record, _ = job
    key = uuid.uuid4()
    assert received(record, key=key) == received(record, key=key)
    assert Sheet.objects.count() == 1


def test_a_sheet_says_what_it_moved_and_by_how_much(job) -> None:
    record, (one, _) = job
    sheet = received(record)
    again = row("101", "1.30", "1.40", mark=one, moved=True, basis=(sheet,))
    plan(record, again, at=after(90))
    (moved,) = moved_with(record, sheet)
    assert (moved.label, moved.across.text, moved.up) == ("101", "0.500", None)
