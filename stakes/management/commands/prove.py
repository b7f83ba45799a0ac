"""`manage.py prove`: read every record against itself and its read models."""

from __future__ import annotations

from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import transaction

from stakes.models import Record
from stakes.record import triggers
from stakes.record.folds import replay
from stakes.record.proving import faults


class _OnlyLooked(Exception):
    """Leaves the transaction of a replay without keeping anything."""


class Command(BaseCommand):
    help = "Check bodies, tree, chains, triggers and read models of every job's record."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("job", nargs="*", help="numbers of jobs; all when left out")
        parser.add_argument(
            "--rebuild",
            action="store_true",
            help="keep the read models as the record makes them anew",
        )

    def handle(self, *_: Any, job: list[str], rebuild: bool, **__: Any) -> None:
        bad = [f"The trigger {name} is missing." for name in triggers.missing()]
        records = Record.objects.order_by("number")
        for record in records.filter(number__in=job) if job else records:
            found = faults(record) + replayed(record, keep=rebuild)
            self.stdout.write(
                f"Job {record.number}: {record.head} entries, "
                + ("all fits." if not found else f"{len(found)} things do not fit.")
            )
            bad += [f"Job {record.number}: {fault}" for fault in found]
        if bad:
            raise CommandError("\n".join(bad))


def replayed(record: Record, *, keep: bool) -> list[str]:
    """What the read models said otherwise than the record does."""
    different: list[str] = []
    try:
        with transaction.atomic():
            Record.objects.select_for_update().get(pk=record.pk)
            different = replay(record)
            if not keep:
                raise _OnlyLooked
    except _OnlyLooked:
        pass
    return [f"Read model {words}" for words in different]
