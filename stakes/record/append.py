"""`append` is the only INSERT into the record.

It locks the record's row, gives each statement its number, writes entry, links, private
parts and tree, and refolds what the statements concern, all in one transaction.
"""

from __future__ import annotations

import secrets
import uuid
from collections.abc import Iterable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field, replace
from datetime import datetime, timedelta
from typing import Any

from django.db import transaction
from django.utils import timezone

from stakes.models.chain import MarkChain
from stakes.models.record import (
    Entry,
    EntryMark,
    EntryMatter,
    PrivatePart,
    Record,
    TreeNode,
)
from stakes.record import folds, merkle
from stakes.record.by import By, Known, TimeKnown, Told
from stakes.record.canonical import canonical, moment_text, sha256_hex
from stakes.record.kinds import (
    Fact,
    MarkLink,
    MatterLink,
    fact_from,
    facts_as_data,
)
from stakes.record.refused import Refused
from stakes.record.said import Said

MOST_AT_ONCE = 1000
"""Entries in one transaction; larger work is cut into acts, so nobody waits for long."""

CLOCKS_MAY_DIFFER = timedelta(minutes=10)
FIRST_LINK = "0" * 64


@contextmanager
def held(record: Record) -> Iterator[Record]:
    """The record's row, locked: what is read inside stays true until it is appended to.

    On SQLite the transaction itself is the lock (IMMEDIATE).
    """
    with transaction.atomic():
        yield Record.objects.select_for_update().get(pk=record.pk)


def append(
    record: Record,
    said: Fact | Said | Sequence[Fact | Said],
    *,
    by: By,
    at: datetime | None = None,
    known: Known = Known.SEEN,
    act: uuid.UUID | None = None,
) -> list[Entry]:
    """Add statements to the record; return their entries, in order.

    A statement whose key the record already holds is not added again: its first entry
    is returned (the same words) or Refused is raised (other words under one key).
    """
    listed = said if isinstance(said, Sequence) else [said]
    statements = [
        s if isinstance(s, Said) else Said(fact=s, at=at, known=known) for s in listed
    ]
    if len(statements) > MOST_AT_ONCE:
        raise ValueError(f"At most {MOST_AT_ONCE} entries in one act.")
    with held(record) as locked:
        writing = _Writing(locked, by, act or uuid.uuid4())
        writing.read_ahead(statements)
        entries = [writing.add(statement) for statement in statements]
        writing.save()
        record.head, record.peaks = locked.head, locked.peaks
        record.head_recorded_at = locked.head_recorded_at
    return entries


@dataclass
class _Writing:
    """One act being written under the lock."""

    record: Record
    by: By
    act: uuid.UUID
    now: datetime = field(init=False)
    entries: list[Entry] = field(default_factory=list)
    marks: list[EntryMark] = field(default_factory=list)
    matters: list[EntryMatter] = field(default_factory=list)
    parts: list[PrivatePart] = field(default_factory=list)
    nodes: list[TreeNode] = field(default_factory=list)
    chains: dict[uuid.UUID, MarkChain] = field(default_factory=dict)
    by_key: dict[uuid.UUID, Entry] = field(default_factory=dict)
    peaks: list[bytes] = field(init=False)

    def __post_init__(self) -> None:
        # Taken after the lock, and never behind the head: order and time agree.
        now, head = timezone.now(), self.record.head_recorded_at
        self.now = max(now, head) if head else now
        self.peaks = [bytes.fromhex(peak) for peak in self.record.peaks]

    def read_ahead(self, statements: Sequence[Said]) -> None:
        """One query for every key spoken of, one for every mark's last link."""
        keys = {s.key for s in statements}
        keys |= {s.corrects for s in statements if s.corrects}
        known = Entry.objects.filter(record=self.record, key__in=keys)
        self.by_key = {entry.key: entry for entry in known}
        marks = {link.mark for s in statements for link in s.fact.marks()}
        chains = MarkChain.objects.filter(record=self.record, mark__in=marks)
        self.chains = {chain.mark: chain for chain in chains}

    def add(self, said: Said) -> Entry:
        said = _as_told(said, self.by.told)
        said_hash = _said_hash(said)
        if known := self._already(said, said_hash):
            return known
        # What cannot be read back must never be written: nothing takes it out again.
        fact_from(said.fact.KIND, facts_as_data(said.fact))
        at = _moment(said, self.now)
        target = self._target(said)
        links, matters = self._concerns(said, target)
        number = self.record.head + 1
        parts = _private_parts(self.record, number, said.private)
        chained = [self._chain(number, link) for link in links]
        body = canonical(_body(self, said, number, at, target, chained, matters, parts))
        leaf = merkle.leaf_hash(body)
        entry = Entry(
            record=self.record,
            number=number,
            kind=said.fact.KIND,
            key=said.key,
            act=self.act,
            happened_at=at,
            recorded_at=self.now,
            counter=said.counter,
            place=target.place if target and not said.withdraws else number,
            person=self.by.person,
            name=self.by.name,
            device=self.by.device,
            known=said.known,
            corrects=target.number if target else None,
            withdraws=said.withdraws,
            body=body.decode(),
            said=said_hash,
            leaf=leaf.hex(),
        )
        self._keep(entry, chained, matters, parts, leaf)
        return entry

    def _already(self, said: Said, said_hash: str) -> Entry | None:
        first = self.by_key.get(said.key)
        if first is not None and first.said != said_hash:
            raise Refused(
                "The same key was used before to say something else.",
                where=f"Entry {first.number} holds what was said first.",
                do="Both are needed: send the second again under a key of its own.",
                code="conflict",
            )
        return first

    def _target(self, said: Said) -> Entry | None:
        if said.corrects is None:
            return None
        target = self.by_key.get(said.corrects)
        if target is None:
            raise Refused(
                "The entry to correct is not in this record.",
                do="Open the entry and correct it from its own page.",
                code="no target",
            )
        if not said.why.strip():
            raise Refused("A correction says why.", do="Write the reason.", field="why")
        if not said.withdraws and target.kind != said.fact.KIND:
            raise Refused(
                f"A correction keeps the kind of its target, {target.kind!r}.",
                do="Withdraw the entry and record what happened instead.",
                code="other kind",
            )
        return target

    def _concerns(
        self, said: Said, target: Entry | None
    ) -> tuple[list[MarkLink], list[MatterLink]]:
        """What the entry names; a correction also names all that its target named."""
        if target is None:
            return one_each(said.fact.marks()), list(said.fact.matters())
        marks = [] if said.withdraws else one_each(said.fact.marks())
        matters = [] if said.withdraws else list(said.fact.matters())
        role = "withdrawn" if said.withdraws else "corrected"
        marks += [
            MarkLink(mark, role)
            for mark in self._marks_of(target)
            if mark not in {link.mark for link in marks}
        ]
        matters += [
            MatterLink(thing, key)
            for thing, key in self._matters_of(target)
            if (thing, key) not in {(link.thing, link.key) for link in matters}
        ]
        return marks, matters

    def _marks_of(self, target: Entry) -> list[uuid.UUID]:
        stored = EntryMark.objects.filter(record=self.record, number=target.number)
        named = list(stored.values_list("mark", flat=True))
        named += [m.mark for m in self.marks if m.number == target.number]
        new = set(named) - self.chains.keys()
        chains = MarkChain.objects.filter(record=self.record, mark__in=new)
        self.chains |= {chain.mark: chain for chain in chains}
        return named

    def _matters_of(self, target: Entry) -> list[tuple[str, uuid.UUID]]:
        stored = EntryMatter.objects.filter(record=self.record, number=target.number)
        named = list(stored.values_list("thing", "key"))
        return named + [
            (m.thing, m.key) for m in self.matters if m.number == target.number
        ]

    def _chain(self, number: int, link: MarkLink) -> EntryMark:
        chain = self.chains.get(link.mark)
        if chain is None:
            chain = self.chains[link.mark] = MarkChain(
                record=self.record, mark=link.mark, running=0, link=FIRST_LINK
            )
        chained = EntryMark(
            record=self.record,
            number=number,
            mark=link.mark,
            role=link.role,
            effect=link.effect,
            running=chain.running + 1,
            previous=chain.link,
        )
        chain.running += 1
        return chained

    def _keep(
        self,
        entry: Entry,
        chained: list[EntryMark],
        matters: list[MatterLink],
        parts: list[PrivatePart],
        leaf: bytes,
    ) -> None:
        for link in chained:
            link.link = link_hash(leaf, link.mark, link.running)
            self.chains[link.mark].link = link.link
        rows = [
            EntryMatter(
                record=self.record,
                number=entry.number,
                thing=matter.thing,
                key=matter.key,
                effect=matter.effect,
            )
            for matter in matters
        ]
        placed: list[EntryMark | EntryMatter] = [*chained, *rows]
        for row in placed:
            row.happened_at, row.counter = entry.happened_at, entry.counter
            row.place = entry.place
        self.entries.append(entry)
        self.by_key[entry.key] = entry
        self.marks += chained
        self.matters += rows
        self.parts += parts
        self._grow(leaf)

    def _grow(self, leaf: bytes) -> None:
        self.peaks = merkle.grow(self.peaks, self.record.head, leaf)
        self.record.head += 1
        run, rest = divmod(self.record.head, merkle.LEAVES_PER_NODE)
        if rest == 0:
            # The peaks of a whole number of runs end in a node of at least one run; the
            # run's own root is its right edge, which is recomputed from its leaves.
            leaves = self._leaves_of_run(run - 1)
            self.nodes.append(
                TreeNode(
                    record=self.record, run=run - 1, hash=merkle.root(leaves).hex()
                )
            )

    def _leaves_of_run(self, run: int) -> list[bytes]:
        start = run * merkle.LEAVES_PER_NODE
        stored = Entry.objects.filter(record=self.record, number__gt=start)
        leaves = list(stored.order_by("number").values_list("leaf", flat=True))
        leaves += [e.leaf for e in self.entries if e.number > start]
        return [bytes.fromhex(leaf) for leaf in leaves]

    def save(self) -> None:
        if not self.entries:
            return
        Entry.objects.bulk_create(self.entries)
        EntryMark.objects.bulk_create(self.marks)
        EntryMatter.objects.bulk_create(self.matters)
        PrivatePart.objects.bulk_create(self.parts)
        TreeNode.objects.bulk_create(self.nodes)
        MarkChain.objects.bulk_create(
            self.chains.values(),
            update_conflicts=True,
            unique_fields=["record", "mark"],
            update_fields=["running", "link"],
        )
        self.record.peaks = [peak.hex() for peak in self.peaks]
        self.record.head_recorded_at = self.now
        self.record.save(update_fields=["head", "peaks", "head_recorded_at"])
        folds.refresh(self.record, self.entries, self.marks, self.matters)


def one_each(links: Iterable[MarkLink]) -> list[MarkLink]:
    """One link for each mark: its chain has one place for an entry, which may touch it
    in two roles and act on it twice."""
    found: dict[uuid.UUID, MarkLink] = {}
    for link in links:
        first = found.get(link.mark)
        if first is None:
            found[link.mark] = link
        else:
            roles = dict.fromkeys([*first.role.split(" and "), link.role])
            effects = [e for e in (first.effect, link.effect) if e]
            found[link.mark] = MarkLink(
                link.mark, " and ".join(roles), "|".join(effects)
            )
    return list(found.values())


def link_hash(leaf: bytes, mark: uuid.UUID, running: int) -> str:
    """What the mark's next link is chained to: this entry, this mark, this place."""
    return sha256_hex(b"\x02" + leaf + mark.bytes + running.to_bytes(8, "big"))


def private_hash(salt: str, text: str) -> str:
    return sha256_hex(bytes.fromhex(salt) + text.encode())


def _as_told(said: Said, told: Told | None) -> Said:
    """The statement with what the device said beside it, where it says nothing else."""
    if told is None:
        return said
    own_clock = said.device_time is not None
    return replace(
        said,
        known=told.known or said.known,
        time_known=said.time_known or told.time_known,
        counter=said.counter or told.counter,
        device_time=said.device_time if own_clock else told.device_time,
        clock_offset_ms=said.clock_offset_ms if own_clock else told.clock_offset_ms,
    )


def _said_hash(said: Said) -> str:
    """What the words were, to tell a retry from another statement under the same key."""
    words = {
        "kind": said.fact.KIND,
        "facts": facts_as_data(said.fact),
        "at": moment_text(said.at) if said.at else "",
        "corrects": str(said.corrects or ""),
        "private": said.private,
    }
    return sha256_hex(canonical(words))


def _moment(said: Said, now: datetime) -> datetime:
    at = said.at or now
    if timezone.is_naive(at):
        raise ValueError("A moment in the record needs a time zone.")
    if at > now + CLOCKS_MAY_DIFFER:
        raise Refused(
            "What is recorded as happened lies in the future.",
            where=f"It is given as {moment_text(at)}.",
            do="Check date, time and the clock of the device.",
            field="at",
            code="future",
        )
    return at


def _private_parts(
    record: Record, number: int, private: dict[str, str]
) -> list[PrivatePart]:
    parts = []
    for name, text in sorted(private.items()):
        salt = secrets.token_hex(16)
        parts.append(
            PrivatePart(
                record=record,
                number=number,
                name=name,
                salt=salt,
                text=text,
                hash=private_hash(salt, text),
            )
        )
    return parts


def _body(
    writing: _Writing,
    said: Said,
    number: int,
    at: datetime,
    target: Entry | None,
    chained: list[EntryMark],
    matters: list[MatterLink],
    parts: list[PrivatePart],
) -> dict[str, Any]:
    """The statement as it is hashed. What is absent is left out, never null."""
    time_known = said.time_known or (
        TimeKnown.DEVICE
        if said.device_time
        else TimeKnown.STATED
        if said.at
        else TimeKnown.SERVER
    )
    body: dict[str, Any] = {
        "v": 1,
        "record": str(writing.record.key),
        "number": number,
        "kind": said.fact.KIND,
        "facts": facts_as_data(said.fact),
        "happened_at": moment_text(at),
        "recorded_at": moment_text(writing.now),
        "known": str(said.known),
        "time_known": str(time_known),
        "person": {"id": writing.by.person, "name": writing.by.name},
        "act": str(writing.act),
        "key": str(said.key),
        "counter": said.counter,
        "device": writing.by.device,
        "admitted_by": writing.by.told.admitted_by if writing.by.told else "",
        "device_time": moment_text(said.device_time) if said.device_time else "",
        "clock_offset_ms": said.clock_offset_ms,
        "corrects": target.number if target else None,
        "withdraws": said.withdraws or None,
        "why": said.why,
        "marks": [
            {"mark": str(m.mark), "role": m.role, "n": m.running, "prev": m.previous}
            for m in chained
        ],
        "matters": [{"thing": m.thing, "key": str(m.key)} for m in matters],
        "private": {part.name: part.hash for part in parts},
    }
    return {k: v for k, v in body.items() if v not in (None, "", [], {})}


def said_again(said: Said, **changes: Any) -> Said:
    """The same statement under a key of its own."""
    return replace(said, key=uuid.uuid4(), **changes)
