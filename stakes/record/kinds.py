"""Kinds of entry: a fact is a frozen, typed structure; its docstring documents it.

A kind says in `marks()` and `matters()` what it concerns and, in a few letters, its
effect there: the fold of a whole job reads those narrow effects, never the facts.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any, ClassVar, NamedTuple, TypeVar
from uuid import UUID

import msgspec

from stakes.record.refused import Refused


class MarkLink(NamedTuple):
    """One mark an entry concerns: in which role, with which effect on its standing."""

    mark: UUID
    role: str
    effect: str = ""


class MatterLink(NamedTuple):
    """One other thing an entry concerns: a setup, sheet, visit, request, handover ..."""

    thing: str
    key: UUID
    effect: str = ""


class Fact(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """What every kind of entry has. Numbers that matter are kept as strings."""

    KIND: ClassVar[str] = ""

    def marks(self) -> Iterable[MarkLink]:
        return ()

    def matters(self) -> Iterable[MatterLink]:
        return ()

    def sentence(self) -> str:
        return f"{self.KIND[:1].upper()}{self.KIND[1:]}."


KINDS: dict[str, type[Fact]] = {}
"""Every kind of entry by the words that name it in the record."""

F = TypeVar("F", bound=type[Fact])


def kind(words: str) -> Callable[[F], F]:
    """Register a fact under past-tense words, unique in the whole program."""

    def declare(fact: F) -> F:
        known = KINDS.get(words)
        if known and (known.__module__, known.__name__) != (
            fact.__module__,
            fact.__name__,
        ):
            raise RuntimeError(f"Two kinds of entry are called {words!r}.")
        fact.KIND = words
        KINDS[words] = fact
        return fact

    return declare


def facts_as_data(fact: Fact) -> dict[str, Any]:
    """The fact as plain strings, integers, lists and dicts, ready to be hashed.

    What stands at its default and is empty is left out, so that a kind may gain fields
    without changing the bytes of what was said before.
    """
    data: dict[str, Any] = msgspec.to_builtins(fact, order="sorted")
    return {k: v for k, v in data.items() if v not in (None, "", [], {})}


def fact_from(words: str, data: dict[str, Any]) -> Fact:
    """The typed fact of an entry; refuses unknown kinds and facts with a sentence."""
    if words not in KINDS:
        raise Refused(
            f"There is no kind of entry called {words!r}.",
            do="Use one of the kinds listed in DEVELOPERS.md.",
            code="unknown kind",
        )
    try:
        return msgspec.convert(data, KINDS[words])
    except msgspec.ValidationError as error:
        raise Refused(
            f"The facts of {words!r} cannot be read: {error}.",
            do="Send the facts as the schema of this kind says.",
            code="unreadable facts",
        ) from error
