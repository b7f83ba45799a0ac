"""The program's own Celery app, with the tests' kind of work registered beside it."""

from __future__ import annotations

from tests.arena import start_django

start_django()

from jobs.config.celery import app  # noqa: E402  (needs the apps to be ready)
from tests.races.noting import register  # noqa: E402

register(0.0)
__all__ = ["app"]
