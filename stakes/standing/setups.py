"""The fold of one setup: open until closed, and from when what it set is in doubt."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime

from stakes.standing.effects import Effect


@dataclass(slots=True)
class SetupState:
    """A setup by its own checks.

    Stakes set at or after `doubt_from` are in question; those set after `passed_at`
    have no check behind them yet, however many came before.
    """

    opened_at: datetime | None = None
    closed_at: datetime | None = None
    opening: str = ""
    closing: str = ""
    passed_at: datetime | None = None
    doubt_from: datetime | None = None
    reason: str = ""

    @property
    def is_open(self) -> bool:
        return self.closed_at is None


def fold(effects: Iterable[Effect]) -> SetupState:
    """The state of a setup after its counting effects, given in the order of facts."""
    state = SetupState()
    for at, _, effect in effects:
        word, *rest = effect.split(";")
        if word in ("open", "recheck", "close"):
            _own_check(state, word, rest[0], at)
        elif word == "stake" and rest[0] == "fail" and int(rest[1]) > 0:
            _doubt(state, state.opened_at or at, "a stake it set failed its check")
        elif word == "answer":
            state.doubt_from, state.reason = None, ""
    return state


def _own_check(state: SetupState, event: str, verdict: str, at: datetime) -> None:
    if event == "open":
        state.opened_at, state.opening = at, verdict
    if event == "close":
        state.closed_at, state.closing = at, verdict
    if verdict == "pass":
        state.passed_at = at
    elif verdict == "fail":
        names = {
            "open": "opening check",
            "recheck": "re-check",
            "close": "closing check",
        }
        since = state.passed_at or state.opened_at or at
        _doubt(state, since, f"its {names[event]} failed")


def _doubt(state: SetupState, since: datetime, reason: str) -> None:
    if state.doubt_from is None or since < state.doubt_from:
        state.doubt_from = since
    state.reason = state.reason or reason
