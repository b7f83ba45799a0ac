"""`manage.py demo`: a firm with two jobs in a database of its own, prepared and served."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandParser

PREPARED = "demo-prepared"


class Command(BaseCommand):
    help = "Prepare and serve the demo, in a database of its own (SQLite, never yours)."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--port", type=int, default=8000)
        parser.add_argument("--no-serve", action="store_true", help="only prepare it")
        parser.add_argument(
            "--inside", action="store_true", help="set by the command itself"
        )

    def handle(
        self, *_: Any, port: int, no_serve: bool, inside: bool, **__: Any
    ) -> None:
        if not inside:
            # Another process, because settings name the database before this runs.
            sys.exit(_in_its_own_place(port, no_serve))
        self._prepare()
        self._say_how_to_enter(port)
        if not no_serve:
            call_command("serve", port=port, no_migrate=True)

    def _prepare(self) -> None:
        mark = settings.DATA_DIR / PREPARED
        if mark.exists():
            self.stdout.write("The demo is prepared already.")
            call_command("migrate", interactive=False, verbosity=0)
            return
        self.stdout.write(
            "Preparing the demo: every entry is made by the real actions."
        )
        call_command("migrate", interactive=False, verbosity=0)
        from jobs.demo.prepare import prepare

        prepare(lambda chapter: self.stdout.write(f"  {chapter} ..."))
        mark.write_text("1\n")

    def _say_how_to_enter(self, port: int) -> None:
        from jobs.demo.people import ROLES
        from jobs.demo.telling import PASSWORD

        self.stdout.write(f"\nSign in at http://127.0.0.1:{port}/ with any of these:")
        for role, name, *_ in ROLES:
            self.stdout.write(f"  {role + '@example.com':30} {name}")
        self.stdout.write(f"The password of all is {PASSWORD}\n")
        self.stdout.write(
            "Look first at job 2614, its plan, mark H4 (ways back) and the holds.\n"
            "Everything was keyed in one go, so each fact shows when it was recorded."
        )


def _in_its_own_place(port: int, no_serve: bool) -> int:
    """Run again with a data folder of the demo's own and no other database named."""
    folder = Path(settings.DATA_DIR) / "demo"
    if folder.exists() and not (folder / PREPARED).exists():
        # Half prepared: an earlier run was stopped in the middle.
        shutil.rmtree(folder)
    env = {k: v for k, v in os.environ.items() if k not in _NOT_OURS}
    env |= {"LATHBOOK_DATA_DIR": str(folder), "PYTHONUNBUFFERED": "1"}
    command = [sys.executable, sys.argv[0], "demo", "--inside", "--port", str(port)]
    command += ["--no-serve"] if no_serve else []
    try:
        return subprocess.call(command, env=env)
    except KeyboardInterrupt:
        return 0


_NOT_OURS = ("DATABASE_URL", "LATHBOOK_OWNER_DATABASE_URL", "LATHBOOK_BROKER_URL")
