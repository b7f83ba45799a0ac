"""A database of its own for races and benchmarks, on the engine the run is about.

Processes started here are real: they commit, contend and can be killed. SQLite gets a
folder of its own, PostgreSQL a database of its own, both gone afterwards.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import uuid
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from urllib.parse import urlparse, urlunparse

ROOT = Path(__file__).resolve().parent.parent


@dataclass(frozen=True)
class Arena:
    """The environment in which processes find the database."""

    env: dict[str, str]
    engine: str

    def start(self, module: str, *args: object) -> subprocess.Popen[str]:
        """Run a module of the tests as a process of its own."""
        return subprocess.Popen(
            [sys.executable, "-m", module, *map(str, args)],
            cwd=ROOT,
            env=self.env,
            stdout=subprocess.PIPE,
            stderr=subprocess.STDOUT,
            text=True,
        )

    def run(self, module: str, *args: object) -> str:
        process = self.start(module, *args)
        said, _ = process.communicate(timeout=600)
        assert process.returncode == 0, said
        return said

    def manage(self, *args: str) -> str:
        done = subprocess.run(
            [sys.executable, "manage.py", *args],
            cwd=ROOT,
            env=self.env,
            capture_output=True,
            text=True,
            timeout=300,
        )
        assert done.returncode == 0, done.stdout + done.stderr
        return done.stdout


@contextmanager
def arena(database_url: str = "") -> Iterator[Arena]:
    """A migrated database: PostgreSQL beside the one named, or SQLite."""
    with tempfile.TemporaryDirectory(prefix="lathbook-arena-") as folder:
        env = {k: v for k, v in os.environ.items() if not k.startswith("LATHBOOK_")}
        env |= {"LATHBOOK_DATA_DIR": folder, "OMP_NUM_THREADS": "1"}
        env.pop("DATABASE_URL", None)
        if not database_url:
            found = Arena(env, "SQLite")
            found.manage("migrate", "--verbosity=0")
            yield found
            return
        with _database_beside(database_url) as url:
            found = Arena(env | {"DATABASE_URL": url}, "PostgreSQL")
            found.manage("migrate", "--verbosity=0")
            yield found


@contextmanager
def _database_beside(url: str) -> Iterator[str]:
    import psycopg

    name = f"lathbook_{uuid.uuid4().hex[:12]}"
    with psycopg.connect(url, autocommit=True) as connection:
        connection.execute(f'CREATE DATABASE "{name}"')
        try:
            yield urlunparse(urlparse(url)._replace(path=f"/{name}"))
        finally:
            connection.execute(f'DROP DATABASE "{name}" WITH (FORCE)')


def start_django() -> None:
    """For a module started in an arena: settings and apps, as manage.py does."""
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "jobs.config.settings")
    import django

    django.setup()
