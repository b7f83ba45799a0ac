"""Many writers at once, and writers killed: nothing lost, nothing forked, no "locked"."""

from __future__ import annotations

import json
import os
import time
from collections.abc import Iterator

import pytest

from tests.arena import Arena, arena

pytestmark = pytest.mark.commits

PROCESSES, THREADS = 4, 5
APPENDS = 200 if os.environ.get("TESTS_RUN_EVERYTHING") else 20


@pytest.fixture(scope="module")
def ring() -> Iterator[Arena]:
    with arena(os.environ.get("DATABASE_URL", "")) as found:
        yield found


def judge(ring: Arena, number: str) -> dict:
    return json.loads(ring.run("tests.races.judge", number))


def sound(found: dict) -> bool:
    return found["in_time"] and not found["faults"] and not found["replay"]


def test_twenty_writers_lose_nothing_and_fork_nothing(ring: Arena) -> None:
    ring.run("tests.races.new_record", "race")
    started = [
        ring.start("tests.races.writers", "race", p, THREADS, APPENDS)
        for p in range(PROCESSES)
    ]
    said = [process.communicate(timeout=300)[0] for process in started]
    assert all(process.returncode == 0 for process in started), said
    keys = {key for lines in said for key in lines.split()}
    found = judge(ring, "race")
    assert found["head"] == PROCESSES * THREADS * APPENDS
    assert set(found["keys"]) == keys
    assert sound(found)


def test_writers_killed_in_the_middle_lose_no_acknowledged_entry(ring: Arena) -> None:
    ring.run("tests.races.new_record", "killed")
    writers = [
        ring.start("tests.races.writers", "killed", p, 3, 5000) for p in range(2)
    ]
    # Wait until both are well under way, then kill them without a word.
    heard = [w.stdout.readline() for w in writers for _ in range(20)]  # type: ignore[union-attr]
    for writer in writers:
        writer.kill()
    rest = [writer.communicate()[0] for writer in writers]
    acknowledged = {line.strip() for line in heard if line.strip()}
    acknowledged |= {k for text in rest for k in text.split("\n")[:-1] if len(k) == 36}
    deadline = time.monotonic() + 10
    while time.monotonic() < deadline:
        found = judge(ring, "killed")
        if acknowledged <= set(found["keys"]):
            break
    assert acknowledged <= set(found["keys"])
    assert sound(found)
    # What was begun can be said again: the same keys are harmless, the rest goes on.
    again = ring.start("tests.races.writers", "killed", 0, 3, 30)
    assert "FAILED" not in again.communicate(timeout=120)[0]
    assert sound(judge(ring, "killed"))
