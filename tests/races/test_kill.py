"""kill -9 of web and worker in the middle of work loses nothing that was promised."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
import urllib.request
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from tests.arena import ROOT, Arena, arena

pytestmark = pytest.mark.commits


@pytest.fixture(scope="module")
def ring() -> Iterator[Arena]:
    with arena(os.environ.get("DATABASE_URL", "")) as found:
        yield found


def until(what: Callable[[], bool], seconds: float = 20.0) -> bool:
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        if what():
            return True
        time.sleep(0.1)
    return False


def test_a_worker_killed_in_the_middle_leaves_its_work_to_the_next(
    ring: Arena, tmp_path: Path
) -> None:
    notes = tmp_path / "notes"
    ring.run("tests.races.noting", "ask", notes, 6)
    first = ring.start("tests.races.noting", "work", notes, 30)
    assert until(lambda: notes.exists() and "begun" in notes.read_text())
    first.kill()
    first.communicate()
    second = ring.start("tests.races.noting", "work", notes, 0.05)
    said, _ = second.communicate(timeout=40)
    assert second.returncode == 0, said
    done = [line for line in notes.read_text().splitlines() if line.startswith("done")]
    assert sorted(done) == [f"done {n}" for n in range(6)]
    assert ring.run("tests.races.noting", "left").strip() == "0"


def free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


def children(parent: int) -> list[int]:
    found = []
    for status in Path("/proc").glob("[0-9]*/stat"):
        try:
            fields = status.read_text().rsplit(")", 1)[1].split()
        except OSError:
            continue
        if int(fields[1]) == parent and fields[0] != "Z":
            found.append(int(status.parent.name))
    return found


@pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="needs /proc")
def test_serve_starts_a_killed_worker_again_and_a_killed_web_leaves_none_behind(
    ring: Arena,
) -> None:
    port = free_port()
    command = [sys.executable, "manage.py", "serve", "--port", str(port)]
    web = subprocess.Popen(command, cwd=ROOT, env=ring.env, stdout=subprocess.DEVNULL)
    try:
        address = f"http://127.0.0.1:{port}/sign-in/"
        assert until(lambda: _answers(address), 40)
        assert until(lambda: len(children(web.pid)) == 1)
        [worker] = children(web.pid)
        os.kill(worker, signal.SIGKILL)
        assert until(lambda: any(c != worker for c in children(web.pid)))
        [again] = [c for c in children(web.pid) if c != worker]
        web.kill()
        web.wait()
        assert until(lambda: not _runs(again)), "the worker outlived its parent"
    finally:
        web.kill()


def _answers(address: str) -> bool:
    try:
        with urllib.request.urlopen(address, timeout=2) as answer:
            return answer.status == 200
    except OSError:
        return False


def _runs(pid: int) -> bool:
    try:
        state = Path(f"/proc/{pid}/stat").read_text().rsplit(")", 1)[1].split()[0]
    except OSError:
        return False
    return state != "Z"
