"""`prove` finds whatever was changed behind the record's back, and names it."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager

import pytest
from django.core.management import CommandError, call_command
from django.db.models import F

from stakes.kinds.condition import MarksGone
from stakes.models import (
    Entry,
    EntryMark,
    Mark,
    MarkChain,
    PrivatePart,
    Record,
    TreeNode,
)
from stakes.record import Said, append, triggers
from stakes.record.proving import faults
from tests.builders import CHIEF, after, make_record, plan, row, set_stake

pytestmark = [pytest.mark.django_db, pytest.mark.no_replay]


@pytest.fixture
def record() -> Record:
    record = make_record()
    one, other = plan(record, row("101", "1", "2"), row("102", "1", "2"))
    set_stake(record, one, None, after(1))
    said = Said(fact=MarksGone(listed=(one, other)), private={"remark": "dozer"})
    append(record, said, by=CHIEF)
    append(record, [MarksGone(listed=(other,))] * 260, by=CHIEF)
    return record


@contextmanager
def unguarded() -> Iterator[None]:
    triggers.remove()
    yield
    triggers.install()


def test_an_untouched_record_fits(record: Record, capsys) -> None:
    assert faults(record) == []
    call_command("prove")
    assert "263 entries, all fits." in capsys.readouterr().out


TOUCHES: list[tuple[Callable[[], object], str]] = [
    (
        lambda: Entry.objects.filter(number=2).update(
            body=Entry.objects.get(number=2).body.replace("Party", "Other")
        ),
        "Entry 2: its words are not those that were hashed.",
    ),
    (
        lambda: Entry.objects.filter(number=2).update(name="Somebody else"),
        "Entry 2: the column person differs",
    ),
    (
        lambda: Entry.objects.filter(number=2).update(happened_at=after(5)),
        "Entry 2: the column happened_at differs",
    ),
    (lambda: Entry.objects.filter(number=3).delete(), "Entry 3 is missing"),
    (lambda: Entry.objects.filter(number=263).delete(), "says it has 263 entries"),
    (lambda: TreeNode.objects.update(hash="0" * 64), "stored node over entries 1"),
    (lambda: EntryMark.objects.filter(number=2).delete(), "is broken there"),
    (lambda: EntryMark.objects.filter(number=263).delete(), "ends elsewhere"),
    (lambda: MarkChain.objects.update(running=F("running") + 1), "ends elsewhere"),
    (lambda: PrivatePart.objects.update(text="wind"), "private part 'remark' was"),
    (lambda: Record.objects.update(peaks=["00" * 32]), "The tree over the entries"),
]


@pytest.mark.parametrize("touch, words", TOUCHES)
def test_whatever_is_touched_is_named(record: Record, touch, words: str) -> None:
    with unguarded():
        touch()
        record.refresh_from_db()
        assert any(words in fault for fault in faults(record)), faults(record)


def test_an_erased_private_part_still_proves(record: Record) -> None:
    PrivatePart.objects.update(text=None)
    assert faults(record) == []


def test_a_read_model_that_drifted_is_told_and_can_be_made_anew(record: Record) -> None:
    Mark.objects.filter(label="101").update(standing="standing")
    with pytest.raises(CommandError, match="Read model mark"):
        call_command("prove")
    with pytest.raises(CommandError):
        call_command("prove", "--rebuild")
    call_command("prove")
    assert Mark.objects.get(label="101").standing == "gone"


def test_a_missing_trigger_is_told(record: Record) -> None:
    triggers.remove()
    try:
        with pytest.raises(
            CommandError, match="stakes_entry_refuses_update is missing"
        ):
            call_command("prove")
    finally:
        triggers.install()
