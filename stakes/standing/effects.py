"""The few letters by which an entry acts on a mark or a setup, written and read here.

A fold of 100,000 entries reads these and never the facts, so they are short and flat:
words joined by ";". They are derived from the facts by each kind and can be made anew.
"""

from __future__ import annotations

from collections.abc import Iterable
from datetime import datetime
from typing import NamedTuple
from uuid import UUID


class Effect(NamedTuple):
    """One link of a mark or matter, in the order of the facts."""

    happened_at: datetime
    number: int
    effect: str


def planned(moved: bool) -> str:
    """The mark was planned, or planned anew in another place."""
    return "plan;moved" if moved else "plan"


def stake_set(
    setup: UUID | None, components: str, old: str, *, held: bool, provisional: bool
) -> str:
    """A stake was set: by which setup, for p(osition) and/or e(levation), and what
    became of the stake before it."""
    flags = ("h" if held else "") + ("p" if provisional else "")
    return f"set;{setup or ''};{components};{old};{flags}"


def seen(lath_down: bool = False) -> str:
    return "seen;lath" if lath_down else "seen"


def disturbed(how: str, components: str) -> str:
    """Leaning, hit or put back by others; the components it casts doubt on."""
    return f"disturbed;{how};{components}"


def gone(witnessed: bool) -> str:
    """Destroyed before somebody's eyes, or found missing."""
    return "gone" if witnessed else "missing"


def checked(
    verdict: str,
    components: str,
    grade: int,
    reaches: Iterable[str],
    setup: UUID | None,
) -> str:
    return f"check;{verdict};{components};{grade};{','.join(reaches)};{setup or ''}"


def adopted(components: str) -> str:
    """The surveyor adopted a value for a control mark."""
    return f"adopt;{components}"


def answered(components: str) -> str:
    """The surveyor answered a doubt in writing."""
    return f"answer;{components}"


def hold_sent(hold: UUID) -> str:
    """A hold covers the mark; several may at once."""
    return f"hold;{hold}"


def hold_lifted(hold: UUID) -> str:
    return f"lift;{hold}"


RETIRED = "retire"
SUPERSEDED = "supersede"
ACCEPTED = "accept"
HANDED_OVER = "hand"
BUILT_FROM = "built"
PULLED = "pulled"


def setup_event(event: str, verdict: str) -> str:
    """`open`, `recheck` or `close` of a setup with the verdict of its check."""
    return f"{event};{verdict}"


def setup_stake_check(verdict: str, grade: int) -> str:
    """An independent check of a stake this setup had set."""
    return f"stake;{verdict};{grade}"
