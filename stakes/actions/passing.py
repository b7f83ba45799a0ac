"""Going past a gate: somebody authorised it, or it was done already and is recorded."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from stakes.queries.gates import Gate
from stakes.record import Refused

DONE_ALREADY = "nobody: it was done already"


@dataclass(frozen=True, slots=True)
class Passage:
    """What is said about the gates of an act.

    `authorised_by` and `how` (by telephone, on site ...) let an act go on; `done` says
    that it was done already: that is always heard, and past every gate.
    """

    authorised_by: str = ""
    how: str = ""
    done: bool = False

    @property
    def words(self) -> str:
        """Who authorised it, as the entry keeps it."""
        if self.done:
            return DONE_ALREADY
        return f"{self.authorised_by.strip()}, {self.how.strip()}"

    def opens(self, gates: Sequence[Gate]) -> bool:
        if self.done or not gates:
            return True
        if any(gate.hard for gate in gates):
            return False
        return bool(self.authorised_by.strip() and self.how.strip())


NO_PASSAGE = Passage()


class Gated(Refused):
    """An act stopped before it was done; `gates` say why and what would do instead."""

    def __init__(self, gates: Sequence[Gate]) -> None:
        self.gates = tuple(gates)
        super().__init__(
            "; ".join(gate.words for gate in gates) + ".",
            do=gates[0].do,
            code="gated",
        )


def passed(gates: Sequence[Gate], passage: Passage) -> tuple[tuple[str, ...], str]:
    """The gates an act passed and who authorised it; raises Gated when it may not."""
    if not passage.opens(gates):
        raise Gated(gates)
    words = tuple(gate.words for gate in gates)
    return words, passage.words if words else ""
