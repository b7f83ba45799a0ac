"""Letters: a consumer of the record that writes one for each matter and reader.

It keeps its position per job by entry number. The letter is a row first and is sent by
a piece of work of its own, so a killed worker neither loses nor repeats a matter.
"""

from __future__ import annotations

from jobs.notices.consuming import CONSUMER, consume, notify

__all__ = ["CONSUMER", "consume", "notify"]
