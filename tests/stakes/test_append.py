"""`append` is the only way into the record, and it never loses or forks anything."""

from __future__ import annotations

import json
import uuid
from datetime import timedelta

import pytest
from django.db import IntegrityError, connection, transaction
from django.utils import timezone

from stakes.kinds.condition import MarksGone
from stakes.kinds.correcting import Withdrawn
from stakes.kinds.setting import StakeSet
from stakes.models import Entry, EntryMark, Mark, PrivatePart, Record, Stake, TreeNode
from stakes.record import Refused, Said, append, entries, merkle
from stakes.record.append import FIRST_LINK, link_hash, private_hash
from stakes.record.canonical import canonical
from tests.builders import CHIEF, after, make_record, open_setup, plan, row, set_stake

pytestmark = pytest.mark.django_db


def test_numbers_are_gapless_and_each_record_has_its_own() -> None:
    one, other = make_record("1"), make_record("2")
    plan(one, row("101", "100", "200"))
    plan(other, row("101", "100", "200"))
    plan(one, row("102", "100", "200"))
    assert list(one.entries.order_by("number").values_list("number", flat=True)) == [
        1,
        2,
    ]
    assert list(other.entries.values_list("number", flat=True)) == [1]


def test_the_same_key_said_again_is_harmless() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "100", "200"))
    said = Said(fact=MarksGone(listed=(mark,)), at=after(5))
    [first] = append(record, said, by=CHIEF)
    [again] = append(record, said, by=CHIEF)
    assert first.number == again.number == 2
    assert record.head == 2


def test_other_words_under_the_same_key_are_refused_and_nothing_is_lost() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "100", "200"))
    key = uuid.uuid4()
    append(record, Said(fact=MarksGone(listed=(mark,)), key=key), by=CHIEF)
    with pytest.raises(Refused, match="Entry 2 holds what was said first"):
        append(
            record,
            Said(fact=MarksGone(listed=(mark,), cause="dozer"), key=key),
            by=CHIEF,
        )
    assert record.entries.count() == 2


def test_the_stored_body_is_canonical_and_its_leaf_is_in_the_tree() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "100.10", "200"))
    set_stake(record, mark, None, after(1), holds="hub and tack")
    leaves = []
    for entry in record.entries.order_by("number"):
        assert canonical(json.loads(entry.body)).decode() == entry.body
        leaf = merkle.leaf_hash(entry.body.encode())
        assert leaf.hex() == entry.leaf
        leaves.append(leaf)
    record.refresh_from_db()
    peaks = [bytes.fromhex(p) for p in record.peaks]
    assert merkle.root_of(peaks) == merkle.root(leaves)


def test_each_mark_has_a_chain_of_its_own() -> None:
    record = make_record()
    one, other = plan(record, row("101", "1", "2"), row("102", "1", "2"))
    set_stake(record, one, None, after(1))
    append(record, MarksGone(listed=(one, other)), by=CHIEF, at=after(2))
    for mark in (one, other):
        previous = FIRST_LINK
        links = EntryMark.objects.filter(mark=mark).order_by("running")
        for running, link in enumerate(links, start=1):
            leaf = bytes.fromhex(Entry.objects.get(number=link.number).leaf)
            assert (link.running, link.previous) == (running, previous)
            assert link.link == link_hash(leaf, mark, running)
            previous = link.link


def test_an_entry_that_touches_a_mark_twice_has_one_place_in_its_chain() -> None:
    from stakes.kinds.condition import ForeignMarkFound
    from stakes.kinds.setups import SetupCheck, SetupOpened, UsedMark
    from stakes.record.proving import faults

    record = make_record()
    [one] = plan(record, row("CP1", "1", "2", purpose="control"))
    found = ForeignMarkFound(mark=uuid.uuid4(), label="X1", words="nail")
    append(record, found, by=CHIEF, at=after(1))
    check = SetupCheck(mark=one, quantity="distance", verdict="pass", oriented_on=True)
    opened = SetupOpened(
        setup=uuid.uuid4(),
        sort="free station",
        used=(UsedMark(mark=one, role="known"),),
        checks=(check,),
    )
    append(record, opened, by=CHIEF, at=after(2))
    append(record, MarksGone(listed=(one, found.mark)), by=CHIEF, at=after(3))
    assert faults(record) == []
    assert Mark.objects.get(label="X1").stakes_set == 1
    assert EntryMark.objects.get(number=3, mark=one).role == "known and check sighted"


def test_every_256_leaves_their_node_is_kept() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    gone = [MarksGone(listed=(mark,)) for _ in range(600)]
    append(record, gone[:300], by=CHIEF)
    append(record, gone[300:], by=CHIEF)
    leaves = [bytes.fromhex(e.leaf) for e in record.entries.order_by("number")]
    nodes = list(TreeNode.objects.order_by("run").values_list("hash", flat=True))
    assert nodes == [
        merkle.root(leaves[:256]).hex(),
        merkle.root(leaves[256:512]).hex(),
    ]


def test_private_parts_stay_outside_the_hashed_body() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    said = Said(
        fact=MarksGone(listed=(mark,)), private={"remark": "the code of the gate"}
    )
    [entry] = append(record, said, by=CHIEF)
    assert "code of the gate" not in entry.body
    part = PrivatePart.objects.get()
    assert json.loads(entry.body)["private"] == {"remark": part.hash}
    assert private_hash(part.salt, "the code of the gate") == part.hash


def test_what_lies_in_the_future_is_refused_with_a_sentence() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    with pytest.raises(Refused, match="lies in the future"):
        later = timezone.now() + timedelta(hours=2)
        append(record, MarksGone(listed=(mark,)), by=CHIEF, at=later)
    assert record.entries.count() == 1


def test_a_fact_that_could_not_be_read_back_is_never_written() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    fact = StakeSet(mark=mark, old="eaten by a bear")  # type: ignore[arg-type]
    with pytest.raises(Refused, match="cannot be read"):
        append(record, fact, by=CHIEF)
    assert record.entries.count() == 1


def test_the_clock_of_the_record_never_runs_backwards() -> None:
    record = make_record()
    ahead = timezone.now() + timedelta(days=1)
    Record.objects.filter(pk=record.pk).update(head_recorded_at=ahead)
    plan(record, row("101", "1", "2"))
    assert record.entries.get().recorded_at == ahead


@pytest.mark.parametrize(
    "rewrite",
    [
        lambda: Entry.objects.update(name="somebody else"),
        lambda: Entry.objects.all()._raw_delete("default"),
        lambda: EntryMark.objects.update(role="x"),
        lambda: TreeNode.objects.all()._raw_delete("default"),
        lambda: Entry.objects.first().save(),
    ],
)
def test_the_database_refuses_to_rewrite_the_record(rewrite: object) -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    append(record, [MarksGone(listed=(mark,))] * 256, by=CHIEF)
    with pytest.raises(IntegrityError, match="only grows"), transaction.atomic():
        rewrite()  # type: ignore[operator]


@pytest.mark.skipif(connection.vendor != "sqlite", reason="REPLACE is SQLite's own")
def test_replace_does_not_slip_past_the_triggers() -> None:
    record = make_record()
    plan(record, row("101", "1", "2"))
    columns = (
        "id, record_id, number, kind, key, act, happened_at, recorded_at, counter,"
    )
    columns += " place, person, name, device, known, withdraws, body, said, leaf"
    copy = f"INSERT OR REPLACE INTO stakes_entry ({columns}) SELECT {columns}"
    with (
        pytest.raises(IntegrityError),
        transaction.atomic(),
        connection.cursor() as cursor,
    ):
        cursor.execute(f"{copy} FROM stakes_entry")


def test_a_replacement_takes_the_place_of_its_target_and_both_are_kept() -> None:
    record = make_record()
    one, other = plan(record, row("101", "1", "2"), row("102", "1", "2"))
    wrong = Said(fact=StakeSet(mark=one), at=after(1))
    append(record, wrong, by=CHIEF)
    right = Said(
        fact=StakeSet(mark=other), at=after(1), corrects=wrong.key, why="wrong number"
    )
    append(record, right, by=CHIEF)
    assert Mark.objects.get(key=one).standing == "planned"
    assert Mark.objects.get(key=other).standing == "standing"
    assert [c.number for c in entries(record, mark=one)] == [1, 3]
    assert [c.number for c in entries(record, mark=one, all_said=True)] == [1, 2, 3]


def test_withdrawing_a_withdrawal_brings_the_fact_back() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    gone = Said(fact=MarksGone(listed=(mark,)), at=after(9))
    set_stake(record, mark, None, after(1))
    append(record, gone, by=CHIEF)
    taken_back = Said(
        fact=Withdrawn(), corrects=gone.key, withdraws=True, why="other stake"
    )
    append(record, taken_back, by=CHIEF)
    assert Mark.objects.get().standing == "standing"
    undone = Said(
        fact=Withdrawn(), corrects=taken_back.key, withdraws=True, why="was right"
    )
    append(record, undone, by=CHIEF)
    assert Mark.objects.get().standing == "gone"


def test_a_correction_without_a_reason_is_refused() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    said = Said(fact=MarksGone(listed=(mark,)))
    append(record, said, by=CHIEF)
    with pytest.raises(Refused, match="says why"):
        append(
            record, Said(fact=Withdrawn(), corrects=said.key, withdraws=True), by=CHIEF
        )


def test_a_late_fact_gives_the_state_it_would_have_given_in_time() -> None:
    record = make_record()
    [mark] = plan(record, row("101", "1", "2"))
    append(record, MarksGone(listed=(mark,)), by=CHIEF, at=after(60))
    set_stake(record, mark, None, after(30))
    stake = Stake.objects.get(mark=mark, ordinal=1)
    assert (stake.standing, stake.first_missing) == ("gone", after(60))


def test_a_setup_whose_recheck_failed_leaves_its_doubt_on_the_setup() -> None:
    from stakes.kinds.setups import SetupCheck, SetupRechecked
    from stakes.models import Setup

    record = make_record()
    a, b, c = plan(record, *(row(f"CP{i}", "1", "2", purpose="control") for i in "123"))
    setup = open_setup(record, [a, b], check=c, at=after(0))
    bad = SetupCheck(mark=c, quantity="position", verdict="fail")
    append(record, SetupRechecked(setup=setup, checks=(bad,)), by=CHIEF, at=after(60))
    stored = Setup.objects.get(key=setup)
    assert (stored.opening, stored.doubt_from) == ("pass", after(0))
    assert stored.reason == "its re-check failed"
