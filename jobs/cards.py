"""Cards of a job's home page: each one matter, and the one thing to do about it.

A part of the house that has something to say there adds a card; the page shows those
whose right its reader has.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NamedTuple

from stakes.can import Asked, Can


class Card(NamedTuple):
    """A template, the right it takes, and the question that fills it.

    `ask` returns the context of the template; None: nothing to say today.
    """

    template: str
    right: Can
    ask: Callable[[Asked], dict[str, Any] | None]


CARDS: list[Card] = []


def card(
    template: str, right: Can
) -> Callable[
    [Callable[[Asked], dict[str, Any] | None]],
    Callable[[Asked], dict[str, Any] | None],
]:
    """Put what a function answers on the home page of every job."""

    def add(
        ask: Callable[[Asked], dict[str, Any] | None],
    ) -> Callable[[Asked], dict[str, Any] | None]:
        CARDS.append(Card(template, right, ask))
        return ask

    return add


def cards_for(asked: Asked) -> list[tuple[str, dict[str, Any]]]:
    """Template and context of each card this reader sees, in the order added."""
    found = []
    for one in CARDS:
        context = one.ask(asked) if asked.can(one.right) else None
        if context is not None:
            found.append((one.template, context))
    return found
