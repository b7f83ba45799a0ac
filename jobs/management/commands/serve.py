"""`manage.py serve`: the web and, without a broker, one child that does the work."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import threading
from typing import Any

import waitress
from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandParser
from django.core.wsgi import get_wsgi_application


class Command(BaseCommand):
    help = "Serve Lathbook on one machine: migrate, then web and worker together."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--host", default="127.0.0.1")
        parser.add_argument("--port", type=int, default=8000)
        parser.add_argument("--threads", type=int, default=8)
        parser.add_argument(
            "--no-migrate",
            action="store_true",
            help="the tables are up to date already",
        )

    def handle(self, *_: Any, **options: Any) -> None:
        # Where another role owns the tables, `migrate` is an act of its own.
        if not options["no_migrate"] and not settings.OWNER_DATABASE_URL:
            call_command("migrate", interactive=False, verbosity=0)
        stop = threading.Event()
        signal.signal(signal.SIGTERM, lambda *_: sys.exit(0))
        keeper = None
        if not settings.BROKER_URL:
            keeper = threading.Thread(target=_keep_worker, args=(stop,))
            keeper.start()
        try:
            self._serve(options["host"], options["port"], options["threads"])
        finally:
            stop.set()
            if keeper is not None:
                keeper.join()

    def _serve(self, host: str, port: int, threads: int) -> None:
        self.stdout.write(f"Lathbook is at http://{host}:{port}/ (stop with Ctrl-C)")
        waitress.serve(
            get_wsgi_application(),
            host=host,
            port=port,
            threads=threads,
            ident="",
            _quiet=True,
        )


def _keep_worker(stop: threading.Event) -> None:
    """Start the worker again whenever it has died."""
    command = [sys.executable, sys.argv[0], "work", "--parent", str(os.getpid())]
    while not stop.is_set():
        with subprocess.Popen(command) as worker:
            while worker.poll() is None and not stop.is_set():
                stop.wait(0.5)
            if worker.poll() is None:
                worker.terminate()
        stop.wait(1.0)
