"""Holds that doubt proposes: what is in question or failed, and under no hold yet."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from jobs.queries.holders import Holder, holders
from stakes.models import Check, Mark, Record, Setup
from stakes.queries.drawing import in_order
from stakes.queries.state import MarkView, job_state
from stakes.standing.marks import Standing, Trust

DOUBTFUL = (Trust.IN_QUESTION, Trust.FAILED)


@dataclass(frozen=True, slots=True)
class Proposal:
    """Marks to be put on hold: built from first, then handed over, then the rest."""

    built: Sequence[MarkView]
    given: Sequence[MarkView]
    rest: Sequence[MarkView]
    holders: Sequence[Holder]

    @property
    def all(self) -> list[MarkView]:
        return [*self.built, *self.given, *self.rest]


def proposal(record: Record) -> Proposal | None:
    """What a surveyor should put on hold or clear now; None: nothing is in doubt."""
    views = [
        view for view in in_order(job_state(record).marks.values()) if _in_doubt(view)
    ]
    if not views:
        return None
    built = [v for v in views if v.stake and v.stake.built_from]
    given = [v for v in views if v.stake and v.stake.handed_over and v not in built]
    rest = [v for v in views if v not in built and v not in given]
    return Proposal(built, given, rest, holders(record, [v.key for v in views]))


def _in_doubt(view: MarkView) -> bool:
    return (
        view.stake is not None
        and view.trust.trust in DOUBTFUL
        and not view.state.held
        and not view.plan.is_control
    )


def with_doubts(records: Iterable[Record]) -> list[Record]:
    """The jobs where a check failed, a setup is in doubt or a stake was disturbed.

    Only there can anything be proposed. Three queries however many jobs there are, so
    that the jobs without a doubt, nearly all of them, are never folded to find out.
    """
    listed = list(records)
    if not listed:
        return []
    keys: set[int] = set()
    for rows in (
        Check.objects.filter(verdict="fail"),
        Setup.objects.filter(doubt_from__isnull=False),
        Mark.objects.filter(standing=str(Standing.DISTURBED)),
    ):
        found = rows.filter(record__in=listed)
        keys |= set(found.values_list("record_id", flat=True).distinct())
    return [record for record in listed if record.pk in keys]
