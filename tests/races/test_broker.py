"""With a broker Celery runs the same claim; a message the broker lost loses no work."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.arena import ROOT, Arena, arena
from tests.races.test_kill import until

BROKER = os.environ.get("TESTS_BROKER_URL", "")
pytestmark = [
    pytest.mark.commits,
    pytest.mark.broker,
    pytest.mark.skipif(not BROKER, reason="no broker named in TESTS_BROKER_URL"),
]


@pytest.fixture
def ring() -> Iterator[Arena]:
    import redis

    redis.Redis.from_url(BROKER).flushdb()
    with arena(os.environ.get("DATABASE_URL", "")) as found:
        found.env["LATHBOOK_BROKER_URL"] = BROKER
        yield found


@pytest.fixture
def celery(ring: Arena) -> Iterator[subprocess.Popen[bytes]]:
    command = [sys.executable, "-m", "celery", "-A", "tests.races.celery_app", "worker"]
    command += ["-P", "solo", "--loglevel", "ERROR"]
    worker = subprocess.Popen(command, cwd=ROOT, env=ring.env)
    yield worker
    worker.terminate()
    worker.wait(timeout=20)


def left(ring: Arena) -> int:
    return int(ring.run("tests.races.noting", "left").strip())


def test_a_worker_on_the_broker_does_what_was_asked_for(
    ring: Arena, celery: object, tmp_path: Path
) -> None:
    ring.run("tests.races.noting", "ask", tmp_path / "notes", 3)
    assert until(lambda: left(ring) == 0, 40)


def test_work_whose_message_the_broker_lost_is_found_by_the_next_sweep(
    ring: Arena, tmp_path: Path
) -> None:
    import redis

    ring.run("tests.races.noting", "ask", tmp_path / "notes", 3)
    redis.Redis.from_url(BROKER).flushdb()
    assert left(ring) == 3
    worker = ring.start("tests.races.noting", "work", tmp_path / "notes", 0)
    said, _ = worker.communicate(timeout=40)
    assert worker.returncode == 0, said
    assert left(ring) == 0
