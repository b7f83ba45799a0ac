"""Trust joined: a stake's own checks, its setup, and the marks the setup leaned on.

Pure: from the states of marks and setups to a word and a reason for each component.
Doubt travels from a bearing mark to the setups made while it was in question, from a
setup to the stakes it set, and on from a stake that served as control.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime
from uuid import UUID

from stakes.standing.marks import MarkState, Proof, StakeState, Trust
from stakes.standing.setups import SetupState


@dataclass(frozen=True, slots=True)
class Leaning:
    """A setup beside the marks it was oriented on (not those it merely checked)."""

    state: SetupState
    bears_on: Sequence[UUID]


@dataclass(frozen=True, slots=True)
class Judged:
    """What may be said of one component of a stake, and why."""

    trust: Trust
    reason: str = ""
    marks: tuple[UUID, ...] = ()
    setup: UUID | None = None


@dataclass(slots=True)
class Judge:
    """Answers for a whole job; remembers what it settled.

    `marks` and `setups` are the states at one (T, K).
    """

    marks: Mapping[UUID, MarkState]
    setups: Mapping[UUID, Leaning]
    _doubts: dict[tuple[UUID, str], tuple[datetime, str, tuple[UUID, ...]] | None] = (
        field(default_factory=dict)
    )

    def stake(self, mark: UUID, component: str) -> Judged:
        """Trust in the current stake of a mark, for "p" or "e"."""
        state = self.marks.get(mark)
        stake = state.stake if state else None
        if stake is None:
            return Judged(Trust.NOT_CHECKED)
        return self.judged(stake, component)

    def judged(self, stake: StakeState, component: str) -> Judged:
        proof = stake.position if component == "p" else stake.elevation
        if stake.superseded:
            return Judged(Trust.SUPERSEDED, "a newer sheet moved it")
        if proof.trust in (Trust.FAILED, Trust.IN_QUESTION):
            return Judged(proof.trust, _own_reason(stake, proof))
        inherited = self._inherited(stake, proof, component)
        return inherited or Judged(proof.trust)

    def _inherited(
        self, stake: StakeState, proof: Proof, component: str
    ) -> Judged | None:
        if stake.setup is None or stake.set_at is None:
            return None
        doubt = self.setup_doubt(stake.setup, component)
        if doubt is None or stake.set_at < doubt[0]:
            return None
        if self._cleared(proof, component, stake):
            return None
        return Judged(Trust.IN_QUESTION, doubt[1], doubt[2], stake.setup)

    def _cleared(self, proof: Proof, component: str, stake: StakeState) -> bool:
        """An independent passing check that itself rests on nothing in question."""
        if proof.trust is not Trust.CHECKED or proof.passed_by is None:
            return False
        if proof.passed_by == stake.setup:
            return False
        return self.setup_doubt(proof.passed_by, component) is None

    def setup_doubt(
        self, setup: UUID, component: str
    ) -> tuple[datetime, str, tuple[UUID, ...]] | None:
        """From when, why and through which marks what a setup set is in question."""
        asked = (setup, component)
        if asked not in self._doubts:
            self._doubts[asked] = None  # a ring of control stands until shown otherwise
            self._doubts[asked] = self._find_doubt(setup, component)
        return self._doubts[asked]

    def _find_doubt(
        self, setup: UUID, component: str
    ) -> tuple[datetime, str, tuple[UUID, ...]] | None:
        leaning = self.setups.get(setup)
        if leaning is None or leaning.state.opened_at is None:
            return None
        opened = leaning.state.opened_at
        bad = tuple(
            m for m in leaning.bears_on if self._was_in_question(m, component, opened)
        )
        if bad:
            return opened, "control it was set from is in question", bad
        if leaning.state.doubt_from is not None:
            return leaning.state.doubt_from, leaning.state.reason, ()
        return None

    def _was_in_question(self, mark: UUID, component: str, at: datetime) -> bool:
        state = self.marks.get(mark)
        if state is None:
            return False
        for stake in state.stakes:
            proof = stake.position if component == "p" else stake.elevation
            if proof.in_question_at(at):
                return True
        stake_then = next(
            (s for s in reversed(state.stakes) if s.set_at and s.set_at <= at), None
        )
        if stake_then is None:
            return False
        proof = stake_then.position if component == "p" else stake_then.elevation
        return self._inherited(stake_then, proof, component) is not None


def worse(one: Judged, other: Judged) -> Judged:
    """The one that asks for more care; for a sign that shows both components."""
    order = [
        Trust.FAILED,
        Trust.IN_QUESTION,
        Trust.SUPERSEDED,
        Trust.NOT_CHECKED,
        Trust.CHECKED,
    ]
    return min(one, other, key=lambda judged: order.index(judged.trust))


def _own_reason(stake: StakeState, proof: Proof) -> str:
    if proof.failed_by:
        return "its check failed"
    return f"found {stake.how}" if stake.how else "it was disturbed"
