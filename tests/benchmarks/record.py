"""The record against the least the database can do, on the engine of DATABASE_URL.

    python -m tests.benchmarks.record              append and as-of, 100,000 entries
    python -m tests.benchmarks.record --stress     as-of of 1,000,000 entries as well

Ratios within one run are what counts; milliseconds belong to the machine.
"""

from __future__ import annotations

import argparse
import os
import resource
import statistics
import sys
import time
import uuid
from collections.abc import Callable
from datetime import timedelta

from tests.arena import arena, start_django


def milliseconds(work: Callable[[], object], rounds: int) -> float:
    """The median of some rounds."""
    taken = []
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        taken.append((time.perf_counter() - start) * 1000)
    return statistics.median(taken)


def line(what: str, ms: float, baseline: str, base_ms: float) -> None:
    print(f"| {what} | {ms:,.2f} | {baseline} | {base_ms:,.2f} | {ms / base_ms:.1f} |")


def appends() -> None:
    """One append and a batch, beside bare rows under the same lock and commit."""
    from stakes.kinds.condition import MarksSeen
    from stakes.models import Entry, Record
    from stakes.record import Said, append
    from stakes.record.append import held
    from tests.builders import CHIEF, make_record, plan, row

    record, bare = make_record("append"), make_record("bare")
    marks = plan(record, *(row(str(n), "1", "2") for n in range(200)))
    [sample] = append(
        record, MarksSeen(listed=(marks[0],), condition="leaning"), by=CHIEF
    )
    head = 0

    def one_bare(count: int) -> None:
        nonlocal head
        with held(bare) as locked:
            rows = []
            for _ in range(count):
                head += 1
                values = {
                    f.attname: getattr(sample, f.attname)
                    for f in Entry._meta.concrete_fields
                    if f.attname != "id"
                }
                values |= {"record_id": bare.pk, "number": head, "key": uuid.uuid4()}
                rows.append(Entry(**values))
            Entry.objects.bulk_create(rows)
            Record.objects.filter(pk=locked.pk).update(head=head)

    turn = iter(range(10**9))

    def said() -> Said:
        mark = marks[next(turn) % len(marks)]
        return Said(fact=MarksSeen(listed=(mark,), condition="undisturbed"))

    one = milliseconds(lambda: append(record, said(), by=CHIEF), 200)
    base = milliseconds(lambda: one_bare(1), 200)
    line("append one entry, refolded", one, "insert one bare row, same lock", base)
    many = milliseconds(
        lambda: append(record, [said() for _ in range(100)], by=CHIEF), 20
    )
    base = milliseconds(lambda: one_bare(100), 20)
    line("append 100 entries, refolded", many, "insert 100 bare rows, same lock", base)


def as_of(entries: int, marks: int = 5000) -> None:
    """A whole job at a moment in its past, beside only reading the same rows."""
    from stakes.models import EntryMark
    from stakes.queries.state import job_state
    from tests.builders import MORNING, make_record, plan, row

    record = make_record(f"as-of-{entries}")
    keys = [
        key
        for start in range(0, marks, 1000)
        for key in plan(
            record, *(row(str(n), str(n), "2") for n in range(start, start + 1000))
        )
    ]
    _fill(record, keys, entries)
    at, known = MORNING + timedelta(minutes=entries * 0.6), int(entries * 0.9)

    def only_read() -> None:
        links = EntryMark.objects.filter(
            record=record, happened_at__lte=at, number__lte=known
        )
        ordered = links.order_by("happened_at", "counter", "place", "number", "id")
        list(ordered.values_list("mark", "happened_at", "number", "effect"))

    rounds = 5 if entries <= 100_000 else 2
    ms = milliseconds(lambda: job_state(record, at=at, known=known), rounds)
    base = milliseconds(only_read, rounds)
    line(
        f"whole job as of (T, K), {entries:,} entries, {marks:,} marks",
        ms,
        "read the same rows in order",
        base,
    )


def _fill(record, keys: list[uuid.UUID], entries: int) -> None:
    """Rows as `append` would leave them, written in bulk: only reading is measured."""
    from stakes.models import Entry, EntryMark
    from stakes.standing import effects
    from tests.builders import after

    cycle = [
        ("set", effects.stake_set(None, "pe", "first", held=False, provisional=False)),
        ("seen", effects.seen()),
        ("checked", effects.checked("pass", "pe", 2, ("place",), None)),
        ("gone", effects.gone(False)),
    ]
    sample = Entry.objects.filter(record=record).latest("number")
    for start in range(record.head, record.head + entries, 5000):
        rows, links = [], []
        for number in range(start + 1, start + 5001):
            role, effect = cycle[number // len(keys) % len(cycle)]
            moment = after(number)
            links.append(
                EntryMark(
                    record=record,
                    number=number,
                    mark=keys[number % len(keys)],
                    role=role,
                    effect=effect,
                    running=number + 1,
                    previous="0" * 64,
                    link="0" * 64,
                    happened_at=moment,
                    place=number,
                )
            )
            rows.append(
                Entry(
                    record=record,
                    number=number,
                    kind=role,
                    key=uuid.uuid4(),
                    act=sample.act,
                    happened_at=moment,
                    recorded_at=moment,
                    place=number,
                    person="p",
                    name="p",
                    known="seen",
                    body="{}",
                    said="0" * 64,
                    leaf="0" * 64,
                )
            )
        Entry.objects.bulk_create(rows)
        EntryMark.objects.bulk_create(links)
    _settle()


def _settle() -> None:
    """Let the engine learn what was written, as it would have over the months."""
    from django.db import connection

    with connection.cursor() as cursor:
        cursor.execute("ANALYZE")


def measure(stress: bool) -> None:
    start_django()
    print("| what | ms | beside | ms | ratio |\n|---|---|---|---|---|")
    appends()
    as_of(100_000)
    if stress:
        as_of(1_000_000)
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss // 1024
    print(f"\nPeak memory {peak} MiB.")


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--stress", action="store_true")
    parser.add_argument("--inside", action="store_true", help=argparse.SUPPRESS)
    options = parser.parse_args()
    if options.inside:
        measure(options.stress)
        return
    with arena(os.environ.get("DATABASE_URL", "")) as ring:
        print(f"{ring.engine}\n")
        more = ["--stress"] if options.stress else []
        process = ring.start("tests.benchmarks.record", "--inside", *more)
        assert process.stdout is not None
        for text in process.stdout:
            sys.stdout.write(text)
            sys.stdout.flush()
        process.wait()


if __name__ == "__main__":
    main()
