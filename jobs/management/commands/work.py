"""`manage.py work`: claims what is due and does it, until told to stop."""

from __future__ import annotations

import os
import signal
import threading
from typing import Any

from django.core.management.base import BaseCommand, CommandParser
from django.db import close_old_connections

from jobs.work import sweep

PAUSE_S = 2.0


class Command(BaseCommand):
    help = "Do the work that waits: mail, computations, papers. Runs until stopped."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument(
            "--once", action="store_true", help="do what is due and end"
        )
        parser.add_argument(
            "--parent", type=int, default=0, help="end when this process has ended"
        )

    def handle(self, *_: Any, once: bool, parent: int, **__: Any) -> None:
        stop = threading.Event()
        if not once:
            for name in (signal.SIGTERM, signal.SIGINT):
                signal.signal(name, lambda *_: stop.set())
        while not stop.is_set():
            close_old_connections()
            busy = sweep()
            if once and not busy:
                return
            # Orphaned by a parent that was killed: a new one starts a worker of its own.
            if parent and os.getppid() != parent:
                return
            if not busy:
                stop.wait(PAUSE_S)
