"""Asking for work: a row in the transaction that made it necessary."""

from __future__ import annotations

from datetime import timedelta
from typing import Any

from django.conf import settings
from django.db import transaction
from django.utils import timezone

from jobs.models import Work


def ask(
    kind: str, about: str = "", *, after: timedelta | None = None, **args: Any
) -> None:
    """Ask for one piece of work; asking again while it waits changes nothing.

    `args` are plain values. The row commits or rolls back with what it belongs to.
    """
    now = timezone.now()
    Work.objects.bulk_create(
        [
            Work(
                kind=kind,
                about=about,
                args=args,
                wanted_at=now,
                not_before=now + (after or timedelta()),
            )
        ],
        ignore_conflicts=True,
    )
    transaction.on_commit(_wake)


def _wake() -> None:
    """Tell a worker sooner than the sweep would; losing this message loses nothing."""
    if settings.EAGER_WORK:
        from jobs.work.doing import sweep

        sweep()
    elif settings.BROKER_URL:
        from jobs.config.celery import wake

        wake()
