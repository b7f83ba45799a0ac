"""Who said it and how it is known."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from enum import StrEnum


@dataclass(frozen=True, slots=True)
class By:
    """The person an entry belongs to: an id and a copied name, and the device used.

    Not a foreign key: the record outlives accounts, and `stakes` knows no users. `told`
    is what a program sent beside the statement, for every entry of the act.
    """

    person: str
    name: str
    device: str = ""
    told: Told | None = None


@dataclass(frozen=True, slots=True)
class Told:
    """What a device says of a statement: its own clock and order, how it is known.

    `clock_offset_ms` was measured when it was sent and is what `happened_at` was moved
    by, unless `time_known` says otherwise. `admitted_by` let a statement in that nobody
    could admit when it came.
    """

    device_time: datetime | None = None
    clock_offset_ms: int | None = None
    counter: int = 0
    known: Known | None = None
    time_known: TimeKnown | None = None
    admitted_by: str = ""


class Known(StrEnum):
    """How a fact is known; shown beside it everywhere."""

    INSTRUMENT = "instrument file"
    MEASURED = "measured and typed"
    SEEN = "seen"
    TOLD = "told"
    PAPER = "copied from paper"
    COMPUTED = "computed"
    ASSUMED = "assumed"
    DECIDED = "decided"


class TimeKnown(StrEnum):
    """How the time of a fact is known."""

    SERVER = "clock of this server"
    DEVICE = "device clock, corrected by its offset at sync"
    STATED = "stated by the person"
