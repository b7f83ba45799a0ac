"""What programs send, before it is looked at closer: bounded, and made of plain texts.

JSON may hold numbers no record can keep, halves of characters, texts of megabytes. All
of that is refused here, with a sentence, so that nothing behind this has to expect it.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from typing import Any

from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.actions.photos import path_of
from stakes.record import Refused

LONGEST_TEXT = 4000
MOST_MEMBERS = 2000
DEEPEST = 12
LARGEST = 2**53 - 1
_LENGTH = {"text", "unit", "nm"}
_SHA256 = re.compile(r"[0-9a-f]{64}")


def bounded(value: Any, depth: int = 0) -> None:
    """Refuse what is too deep, too long, too large, or no text at all."""
    if depth > DEEPEST:
        raise unreadable(f"It is nested more than {DEEPEST} deep.")
    match value:
        case str():
            _text(value)
        case bool() | None:
            return
        case int() if abs(value) > LARGEST:
            raise unreadable(f"The number {str(value)[:20]}... is too large.")
        case float() if not math.isfinite(value):
            raise unreadable("A number in it is infinite.")
        case dict() | list():
            _members(value, depth)


def _text(text: str) -> None:
    if len(text) > LONGEST_TEXT:
        raise unreadable(f"A text has {len(text)} letters; at most {LONGEST_TEXT}.")
    if "\x00" in text or any("\ud800" <= letter <= "\udfff" for letter in text):
        raise unreadable(f"{text[:40]!a} holds letters that are none.")


def _members(value: dict[Any, Any] | list[Any], depth: int) -> None:
    if len(value) > MOST_MEMBERS:
        raise unreadable(f"A list has {len(value)} members; at most {MOST_MEMBERS}.")
    if isinstance(value, dict):
        for name in value:
            _text(name)
    for member in value.values() if isinstance(value, dict) else value:
        bounded(member, depth + 1)


def measured(value: Any) -> Any:
    """Lengths as people write them, with the nanometres they stand for worked out here.

    `{"text": "12.5", "unit": "ft"}` is enough; nanometres sent along must agree.
    """
    if isinstance(value, list):
        return [measured(member) for member in value]
    if not isinstance(value, dict):
        return value
    if "text" in value and "unit" in value and value.keys() <= _LENGTH:
        return _length(value)
    return {name: measured(member) for name, member in value.items()}


def _length(value: dict[str, Any]) -> dict[str, str]:
    text, unit = str(value["text"]), str(value["unit"])
    try:
        length = Length.parse(text, Unit(unit))
    except GeometryError as error:
        raise unreadable(str(error)) from error
    except ValueError as error:
        raise unreadable(f"{unit!r} is no unit of length: m, ft or ftUS.") from error
    nm = str(length.nanometres)
    if value.get("nm", nm) != nm:
        raise unreadable(f"{text} {unit} is {nm} nanometres, not {value['nm']}.")
    return {"text": length.text, "unit": str(length.unit), "nm": nm}


def refuse_strange_photos(facts: dict[str, Any]) -> None:
    """Photos are named by the SHA-256 of files that were sent before."""
    named = facts.get("photos", [])
    for sha256 in named if isinstance(named, list) else [named]:
        known = isinstance(sha256, str) and _SHA256.fullmatch(sha256)
        if not known or not path_of(sha256).exists():
            raise Refused(
                f"There is no photo {str(sha256)[:64]!r} here.",
                do="Send the photo first, then name it by its SHA-256.",
                field="photos",
                code="no photo",
            )


def refuse_unknown_names(sent: Any, read: Any, where: str = "facts") -> None:
    """A misspelled name must not be dropped in silence."""
    for name, inner, found in _pairs(sent, read):
        if found is _MISSING:
            raise unreadable(f"Nothing is called {name!r} in {where}.")
        refuse_unknown_names(inner, found, f"{where}.{name}")


_MISSING = object()


def _pairs(sent: Any, read: Any) -> Iterator[tuple[str, Any, Any]]:
    if isinstance(sent, dict) and isinstance(read, dict):
        for name, inner in sent.items():
            yield name, inner, read.get(name, _MISSING)
    elif isinstance(sent, list) and isinstance(read, list):
        for place, (inner, found) in enumerate(zip(sent, read, strict=False)):
            yield str(place), inner, found


def unreadable(why: str) -> Refused:
    return Refused(f"This cannot be read: {why}", code="unreadable")
