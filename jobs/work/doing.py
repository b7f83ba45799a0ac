"""Doing work: claim a due row by a lease, do it, mark it done. Idempotent by contract.

The claim is one conditional UPDATE, so of many workers exactly one gets the row on
either engine. A worker that dies keeps its claim only until the lease runs out.
"""

from __future__ import annotations

import logging
import uuid
from collections.abc import Callable
from datetime import datetime, timedelta
from typing import Any

from django.db.models import Q
from django.utils import timezone

from jobs.models import Work

log = logging.getLogger("lathbook.work")

LEASE = timedelta(minutes=5)
MOST_ATTEMPTS = 12

Worker = Callable[..., None]
WORKERS: dict[str, Worker] = {}
"""What does each kind of work."""


def does(kind: str) -> Callable[[Worker], Worker]:
    """Register the function that does one kind of work; it must bear being done twice."""

    def declare(worker: Worker) -> Worker:
        WORKERS[kind] = worker
        return worker

    return declare


def sweep(most: int = 100) -> int:
    """Do what is due, up to `most` pieces; return how many were done."""
    done = 0
    for _ in range(most):
        claimed = claim()
        if claimed is None:
            break
        done += do(claimed)
    return done


def claim(now: datetime | None = None) -> Work | None:
    """Take the piece that has waited longest, or None when nothing is due."""
    now = now or timezone.now()
    free = Q(claim__isnull=True) | Q(lease_until__lt=now)
    due = Work.objects.filter(
        free, done_at__isnull=True, given_up_at__isnull=True, not_before__lte=now
    )
    for pk in due.order_by("not_before", "pk").values_list("pk", flat=True)[:5]:
        mine = uuid.uuid4()
        taken = Work.objects.filter(free, pk=pk, done_at__isnull=True).update(
            claim=mine, lease_until=now + LEASE
        )
        if taken:
            return Work.objects.get(pk=pk)
    return None


def do(work: Work) -> bool:
    """Do one claimed piece; a failure waits longer each time and says why.

    No transaction is held meanwhile: work may write mail or draw for minutes. Whoever
    lost the lease in between leaves the row to the one who holds it now.
    """
    try:
        WORKERS[work.kind](**work.args)
    except Exception as error:
        log.exception("%s failed", work)
        _put_back(work, error)
        return False
    done = Work.objects.filter(pk=work.pk, claim=work.claim)
    return bool(done.update(done_at=timezone.now(), trouble=""))


def _put_back(work: Work, error: Exception) -> None:
    attempts = work.attempts + 1
    now = timezone.now()
    changes: dict[str, Any] = {
        "attempts": attempts,
        "trouble": f"{type(error).__name__}: {error}"[:2000],
        "lease_until": None,
    }
    if attempts >= MOST_ATTEMPTS:
        changes["given_up_at"] = now
    else:
        # Kept under the claim until its time, so that a new wish gets a row of its own.
        changes["not_before"] = now + timedelta(seconds=min(3600, 5 * 2**attempts))
        changes["lease_until"] = now
    Work.objects.filter(pk=work.pk, claim=work.claim).update(**changes)
