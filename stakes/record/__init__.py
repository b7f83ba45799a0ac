"""The append-only record of a job: say something with `append`, read with `reading`."""

from __future__ import annotations

from stakes.record.append import append, held
from stakes.record.by import By, Known, TimeKnown, Told
from stakes.record.kinds import KINDS, Fact, MarkLink, MatterLink, kind
from stakes.record.reading import Counted, entries
from stakes.record.refused import Refused
from stakes.record.said import Said

__all__ = [
    "KINDS",
    "By",
    "Counted",
    "Fact",
    "Known",
    "MarkLink",
    "MatterLink",
    "Refused",
    "Said",
    "TimeKnown",
    "Told",
    "append",
    "entries",
    "held",
    "kind",
]
