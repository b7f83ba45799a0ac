"""Who said it and how it is known."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


@dataclass(frozen=True, slots=True)
class By:
    """The person an entry belongs to: an id and a copied name, and the device used.

    Not a foreign key: the record outlives accounts, and `stakes` knows no users.
    """

    person: str
    name: str
    device: str = ""


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
