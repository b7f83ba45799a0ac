"""The fact of a withdrawal. A replacement is an entry of its target's own kind."""

from __future__ import annotations

from stakes.record.kinds import Fact, kind


@kind("withdrawn")
class Withdrawn(Fact, kw_only=True):
    """What an entry said is taken back; why stands beside it. It is never erased."""

    def sentence(self) -> str:
        return "An earlier entry was withdrawn."
