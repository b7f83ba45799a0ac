"""The fold of one mark: its stakes, what is on the ground, its own checks.

Total: any order of effects gives a state, for people report what they find. It judges a
mark by its own entries alone; what its setup and control add is joined in `trust`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from datetime import datetime
from enum import StrEnum
from functools import lru_cache
from uuid import UUID

from stakes.standing.effects import Effect

Act = Callable[["MarkState", datetime, int, list[str]], None]


class Standing(StrEnum):
    """What is on the ground."""

    PLANNED = "planned"
    STANDING = "standing"
    DISTURBED = "disturbed"
    GONE = "gone"
    RETIRED = "retired"


class Trust(StrEnum):
    """What may be said of what was given from it."""

    NOT_CHECKED = "not checked"
    CHECKED = "checked"
    IN_QUESTION = "in question"
    FAILED = "failed"
    SUPERSEDED = "superseded"


@dataclass(slots=True)
class Proof:
    """One component of one stake, position or elevation, by its own checks."""

    trust: Trust = Trust.NOT_CHECKED
    grade: int = 0
    reaches: frozenset[str] = frozenset()
    passed_at: datetime | None = None
    passed_by: UUID | None = None
    doubt_from: datetime | None = None
    doubts: list[tuple[datetime, datetime | None]] = field(default_factory=list)
    failed_by: str = ""

    def passed(self, at: datetime, grade: int, reaches: list[str], setup: str) -> None:
        """A passing check; only one that is independent of the setting clears."""
        if grade == 0:
            return
        self.trust = Trust.CHECKED
        self.grade = max(self.grade, grade)
        self.reaches |= frozenset(reaches)
        self.passed_at, self.passed_by = at, UUID(setup) if setup else None
        self.clear()

    def failed(self, at: datetime, setup: str, since: datetime | None) -> None:
        """A first failure is a question; the same again by another setup is a fact."""
        again = self.trust is Trust.IN_QUESTION and self.failed_by not in ("", setup)
        self.trust = Trust.FAILED if again else Trust.IN_QUESTION
        self.failed_by = self.failed_by or setup or "a check"
        if self.doubt_from is None:
            self.doubt_from = self.passed_at or since or at

    def question(self, at: datetime) -> None:
        """What happened to the stake puts it in question from then on."""
        if self.trust is not Trust.FAILED:
            self.trust = Trust.IN_QUESTION
        self.doubt_from = self.doubt_from or at

    def clear(self) -> None:
        self.doubt_from, self.failed_by = None, ""

    def valued_anew(self, at: datetime) -> None:
        """A new value holds from now; what rested on the old one stays in question."""
        if self.doubt_from is not None:
            self.doubts.append((self.doubt_from, at))
        self.clear()
        self.trust, self.passed_at = Trust.CHECKED, at

    def in_question_at(self, moment: datetime) -> bool:
        """Whether something that leaned on the mark at this moment is in question."""
        if self.doubt_from is not None and moment >= self.doubt_from:
            return True
        return any(a <= moment and (b is None or moment < b) for a, b in self.doubts)


@dataclass(slots=True)
class StakeState:
    """One physical stake of a mark."""

    ordinal: int
    set_at: datetime | None
    set_number: int | None
    setup: UUID | None
    components: str
    standing: Standing = Standing.STANDING
    how: str = ""
    last_seen: datetime | None = None
    first_missing: datetime | None = None
    lath_down: bool = False
    held: bool = False
    provisional: bool = False
    superseded: bool = False
    handed_over: bool = False
    built_from: bool = False
    fate: str = ""
    position: Proof = field(default_factory=Proof)
    elevation: Proof = field(default_factory=Proof)

    def proofs(self, components: str) -> list[Proof]:
        return [
            *([self.position] if "p" in components else []),
            *([self.elevation] if "e" in components else []),
        ]


@dataclass(slots=True)
class MarkState:
    """A mark by its own entries."""

    planned_at: datetime | None = None
    retired_at: datetime | None = None
    holds: set[str] = field(default_factory=set)
    stakes: list[StakeState] = field(default_factory=list)

    @property
    def held(self) -> bool:
        """A hold is out on it."""
        return bool(self.holds)

    @property
    def stake(self) -> StakeState | None:
        return self.stakes[-1] if self.stakes else None

    @property
    def standing(self) -> Standing:
        if self.retired_at is not None:
            return Standing.RETIRED
        return self.stake.standing if self.stake else Standing.PLANNED

    @property
    def doubled(self) -> bool:
        """An older stake was left standing beside the one that counts."""
        up = (Standing.STANDING, Standing.DISTURBED)
        return any(stake.standing in up for stake in self.stakes[:-1])


def fold(effects: Iterable[Effect]) -> MarkState:
    """The state of a mark after its counting effects, given in the order of facts."""
    state = MarkState()
    for at, number, effect in effects:
        apply(state, at, number, effect)
    return state


def apply(state: MarkState, at: datetime, number: int, effect: str) -> None:
    """Let one effect act on a mark; a whole job is folded by this, row by row."""
    for act, rest in _read(effect):
        act(state, at, number, rest)


@lru_cache(maxsize=8192)
def _read(effect: str) -> list[tuple[Act, list[str]]]:
    """Effects repeat: most stakes of a setup are set by the very same letters. An entry
    that acts on a mark twice joins both by "|"."""
    found = []
    for part in effect.split("|"):
        word, *rest = part.split(";")
        if word in _ACTS:
            found.append((_ACTS[word], rest))
    return found


def _current(state: MarkState, at: datetime) -> StakeState:
    """The stake evidence belongs to; one nobody recorded setting is known from then."""
    if not state.stakes:
        state.stakes.append(StakeState(1, None, None, None, "pe", last_seen=at))
    return state.stakes[-1]


def _plan(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    state.planned_at = state.planned_at or at
    state.retired_at = None
    if rest and state.stake:
        state.stake.superseded = True


def _set(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    setup, components, old, flags = rest
    if state.stake:
        _leave(state.stake, old, at)
    state.stakes.append(
        StakeState(
            ordinal=len(state.stakes) + 1,
            set_at=at,
            set_number=number,
            setup=UUID(setup) if setup else None,
            components=components,
            last_seen=at,
            held="h" in flags,
            provisional="p" in flags,
        )
    )
    state.retired_at = None


def _leave(stake: StakeState, old: str, at: datetime) -> None:
    """What became of the stake before: pulled, not found, or left and voided."""
    stake.fate = old
    if old in ("pulled", "not found") and stake.standing is not Standing.GONE:
        stake.standing, stake.first_missing = Standing.GONE, at


def _seen(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    stake = _current(state, at)
    stake.last_seen = max(at, stake.last_seen or at)
    stake.lath_down = bool(rest)
    if stake.standing is Standing.GONE:
        # Somebody stood it up again, or it was there all along: only a check can tell.
        stake.standing, stake.first_missing = Standing.DISTURBED, None
        stake.how = "seen after it was reported gone"
        _doubt(stake, "pe", at)


def _disturbed(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    stake = _current(state, at)
    stake.standing, stake.how = Standing.DISTURBED, rest[0]
    stake.last_seen, stake.first_missing = max(at, stake.last_seen or at), None
    _doubt(stake, rest[1], at)


def _gone(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    stake = _current(state, at)
    stake.standing = Standing.GONE
    stake.first_missing = stake.first_missing or at


def _check(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    verdict, components, grade, reaches, setup = rest
    stake = _current(state, at)
    stake.last_seen = max(at, stake.last_seen or at)
    for proof in stake.proofs(components):
        if verdict == "pass":
            proof.passed(at, int(grade), reaches.split(","), setup)
        elif verdict == "fail":
            proof.failed(at, setup, stake.set_at)
    if verdict == "pass" and int(grade) > 0:
        stake.held = False
        if stake.standing is Standing.DISTURBED and not _in_doubt(stake):
            stake.standing, stake.how = Standing.STANDING, ""


def _adopt(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    for proof in _current(state, at).proofs(rest[0]):
        proof.valued_anew(at)


def _answer(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    if state.stake is None:
        return
    for proof in state.stake.proofs(rest[0]):
        proof.clear()
        proof.trust = Trust.CHECKED if proof.passed_at else Trust.NOT_CHECKED


def _retire(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    state.retired_at = at


def _supersede(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    if state.stake:
        state.stake.superseded = True


def _accept(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    if state.stake:
        state.stake.held = False


def _hand(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    if state.stake:
        state.stake.handed_over = True


def _built(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    if state.stake:
        state.stake.built_from = True


def _hold(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    state.holds.add(rest[0])


def _lift(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    state.holds.discard(rest[0])


def _pulled(state: MarkState, at: datetime, number: int, rest: list[str]) -> None:
    """Old stakes left beside the current one were pulled."""
    for stake in state.stakes[:-1]:
        if stake.standing is not Standing.GONE:
            stake.standing, stake.first_missing, stake.fate = (
                Standing.GONE,
                at,
                "pulled",
            )


def _doubt(stake: StakeState, components: str, at: datetime) -> None:
    for proof in stake.proofs(components):
        proof.question(at)


def _in_doubt(stake: StakeState) -> bool:
    return any(proof.doubt_from for proof in stake.proofs(stake.components))


_ACTS: dict[str, Act] = {
    "plan": _plan,
    "set": _set,
    "seen": _seen,
    "disturbed": _disturbed,
    "gone": _gone,
    "missing": _gone,
    "check": _check,
    "adopt": _adopt,
    "answer": _answer,
    "retire": _retire,
    "supersede": _supersede,
    "accept": _accept,
    "hand": _hand,
    "built": _built,
    "hold": _hold,
    "lift": _lift,
    "pulled": _pulled,
}
