"""(T, K) from an address: at which moment, by what was recorded up to which entry."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from urllib.parse import urlencode

from django.http import HttpRequest

from stakes.models import Entry, Record
from stakes.record import Refused
from stakes.templatetags.lathbook import moment_words


@dataclass(frozen=True, slots=True)
class Moment:
    """What a page is shown at; now is (None, None)."""

    at: datetime | None = None
    known: int | None = None
    words: str = "as of now"

    @property
    def is_now(self) -> bool:
        return self.at is None and self.known is None

    @property
    def query(self) -> str:
        """The part of an address that says the same again."""
        said = {
            "at": self.at.strftime("%Y-%m-%dT%H:%M") if self.at else "",
            "known": str(self.known) if self.known is not None else "",
        }
        return urlencode({k: v for k, v in said.items() if v})


def moment_of(request: HttpRequest, record: Record) -> Moment:
    """Read `at` (a local time of the job) and `known` (an entry number, or a time, which
    means the last entry recorded by then). Raises Refused with what to write instead."""
    at = _local(request.GET.get("at", ""), record, "at")
    known = _known(request.GET.get("known", ""), record)
    if at is None and known is None:
        return Moment()
    parts = [f"as of {moment_words(at)}" if at else "as of now"]
    if known is not None:
        parts.append(f"by what was known at entry {known}")
    return Moment(at, known, ", ".join(parts))


def _known(text: str, record: Record) -> int | None:
    text = text.strip()
    if not text:
        return None
    if text.isascii() and text.isdigit() and len(text) < 16:
        return min(int(text), record.head)
    by = _local(text, record, "known")
    last = Entry.objects.filter(record=record, recorded_at__lte=by).order_by("-number")
    return last.values_list("number", flat=True).first() or 0


def _local(text: str, record: Record, field: str) -> datetime | None:
    text = text.strip()
    if not text:
        return None
    try:
        moment = datetime.fromisoformat(text)
    except ValueError as error:
        raise Refused(
            f"{text[:40]!r} is not a date and time.",
            do="Write it as 2026-03-02T16:40.",
            field=field,
        ) from error
    if moment.tzinfo is None:
        moment = moment.replace(tzinfo=record.time_zone)
    return moment.astimezone(record.time_zone)
