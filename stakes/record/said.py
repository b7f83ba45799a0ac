"""One thing said to the record, before it has a number."""

from __future__ import annotations

import uuid
from dataclasses import dataclass, field
from datetime import datetime

from stakes.record.by import Known, TimeKnown
from stakes.record.kinds import Fact


@dataclass(frozen=True, slots=True)
class Said:
    """A fact and the circumstances in which it was said.

    `at` is when it happened (None: now); `key` is made by whoever says it first, so
    that saying it again is harmless; `counter` orders what one device said at one
    moment. `corrects` is the key of the entry whose place this takes, with `why`.
    `private` parts stay outside the hashed body: name -> text.
    """

    fact: Fact
    at: datetime | None = None
    known: Known = Known.SEEN
    time_known: TimeKnown | None = None
    key: uuid.UUID = field(default_factory=uuid.uuid4)
    counter: int = 0
    device_time: datetime | None = None
    clock_offset_ms: int | None = None
    corrects: uuid.UUID | None = None
    withdraws: bool = False
    why: str = ""
    private: dict[str, str] = field(default_factory=dict)
