"""Reading a whole record against itself: bodies, leaves, tree, chains, private parts.

Finds what an accident or a careless hand did. Whoever holds the database and rewrites
all of it consistently is found only against a copy that someone else holds.
"""

from __future__ import annotations

import json
from collections.abc import Iterator
from uuid import UUID

from stakes.models.chain import MarkChain
from stakes.models.record import Entry, EntryMark, PrivatePart, Record, TreeNode
from stakes.record import merkle
from stakes.record.append import FIRST_LINK, link_hash, private_hash
from stakes.record.canonical import canonical, moment_text

MOST_FAULTS = 50


def faults(record: Record) -> list[str]:
    """A sentence for each thing that does not fit, at most 50; empty when all fits."""
    found: list[str] = []
    for fault in _faults(record):
        found.append(fault)
        if len(found) == MOST_FAULTS:
            break
    return found


def _faults(record: Record) -> Iterator[str]:
    leaves: dict[int, bytes] = {}
    peaks: list[bytes] = []
    wanted = 1
    for entry in record.entries.order_by("number").iterator(chunk_size=1000):
        if entry.number != wanted:
            yield f"Entry {wanted} is missing: the next is {entry.number}."
        wanted = entry.number + 1
        yield from _entry_faults(record, entry)
        leaf = merkle.leaf_hash(entry.body.encode())
        peaks = merkle.grow(peaks, len(leaves), leaf)
        leaves[entry.number] = leaf
    if record.head != len(leaves):
        yield f"The record says it has {record.head} entries and holds {len(leaves)}."
    if [peak.hex() for peak in peaks] != record.peaks:
        yield "The tree over the entries is not the one the record keeps."
    yield from _node_faults(record, leaves)
    yield from _chain_faults(record, leaves)
    yield from _private_faults(record)


def _entry_faults(record: Record, entry: Entry) -> Iterator[str]:
    where = f"Entry {entry.number}"
    if merkle.leaf_hash(entry.body.encode()).hex() != entry.leaf:
        yield f"{where}: its words are not those that were hashed."
    body = json.loads(entry.body)
    if canonical(body).decode() != entry.body:
        yield f"{where}: its body is not in canonical form."
    columns = {
        "record": str(record.key),
        "number": entry.number,
        "kind": entry.kind,
        "key": str(entry.key),
        "act": str(entry.act),
        "happened_at": moment_text(entry.happened_at),
        "recorded_at": moment_text(entry.recorded_at),
        "known": entry.known,
        "person": {"id": entry.person, "name": entry.name},
    }
    for name, value in columns.items():
        if body.get(name) != value:
            yield f"{where}: the column {name} differs from what was hashed."


def _node_faults(record: Record, leaves: dict[int, bytes]) -> Iterator[str]:
    for node in TreeNode.objects.filter(record=record):
        start = node.run * merkle.LEAVES_PER_NODE
        run = [leaves.get(start + i + 1, b"") for i in range(merkle.LEAVES_PER_NODE)]
        if merkle.root(run).hex() != node.hash:
            yield f"The stored node over entries {start + 1} and on does not fit."


def _chain_faults(record: Record, leaves: dict[int, bytes]) -> Iterator[str]:
    ends: dict[UUID, tuple[int, str]] = {}
    links = EntryMark.objects.filter(record=record).order_by("mark", "running")
    for link in links.iterator(chunk_size=2000):
        running, previous = ends.get(link.mark, (0, FIRST_LINK))
        leaf = leaves.get(link.number, b"")
        if (link.running, link.previous) != (running + 1, previous) or (
            link.link != link_hash(leaf, link.mark, link.running)
        ):
            yield f"Entry {link.number}: the list of mark {link.mark} is broken there."
        ends[link.mark] = (link.running, link.link)
    for chain in MarkChain.objects.filter(record=record):
        if ends.get(chain.mark) != (chain.running, chain.link):
            yield f"The list of mark {chain.mark} ends elsewhere than the record says."


def _private_faults(record: Record) -> Iterator[str]:
    for part in PrivatePart.objects.filter(record=record).exclude(text=None):
        if part.text is not None and private_hash(part.salt, part.text) != part.hash:
            yield f"Entry {part.number}: its private part {part.name!r} was changed."
