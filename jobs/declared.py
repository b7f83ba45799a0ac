"""What a view declares: the rights it needs on its job, or to whom it is open.

A right may be declared on a function, on a class, or on one method of a class.
"""

from __future__ import annotations

from collections.abc import Callable
from enum import StrEnum
from typing import Any, TypeVar

from stakes.can import Can

View = TypeVar("View", bound=Callable[..., object])


class Who(StrEnum):
    """Who may open an address outside any job."""

    ANYONE = "anyone"
    SIGNED_IN = "people who signed in"
    OFFICE = "the firm's managers and surveyors"
    MANAGER = "the firm's managers"


class Undeclared(Exception):
    """A view says nothing about who may open it, or says it for the wrong place."""


def open_to(who: Who) -> Callable[[View], View]:
    """Declare to whom a view outside any job is open."""

    def declare(view: View) -> View:
        view.open_to = who  # type: ignore[attr-defined]
        return view

    return declare


def declared(view: Any, method: str, *, under_job: bool) -> Who | frozenset[Can]:
    """What this view asks of whoever sends this method.

    Under a job only rights count, outside only `open_to`: a view that could be put at
    both kinds of address must not bring the laxer rule with it.
    """
    name = "needs" if under_job else "open_to"
    for source in _sources(view, method):
        found = getattr(source, name, None)
        if found is not None and not callable(found):
            return found
    where = "rights (`needs`)" if under_job else "to whom it is open (`open_to`)"
    raise Undeclared(f"{getattr(view, '__name__', view)} does not declare {where}.")


def _sources(view: Any, method: str) -> list[Any]:
    """Where a declaration may stand, the narrowest first."""
    kind = getattr(view, "cls", None) or getattr(view, "view_class", None)
    if kind is None:
        return [view]
    verb = "get" if method in ("HEAD", "OPTIONS") else method.lower()
    actions = getattr(view, "actions", None) or {}
    handler = getattr(kind, actions.get(verb, verb), None)
    return [source for source in (handler, view, kind) if source is not None]
