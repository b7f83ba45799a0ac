"""The exact bytes that are hashed: RFC 8785 for the values the record allows.

The record holds no floats and no integer beyond 2**53, and its keys are ASCII, so
sorting keys and the standard encoder give the canonical form; tests hold it against
the `rfc8785` library.
"""

from __future__ import annotations

import hashlib
import json
from datetime import UTC, datetime
from typing import Any

LARGEST_EXACT = 2**53 - 1


def canonical(value: Any) -> bytes:
    """The canonical bytes of a value of dicts, lists, strings, integers, booleans, None.

    Raises ValueError for anything else; a float in the record is a fault of ours.
    """
    _refuse_inexact(value)
    return json.dumps(
        value, sort_keys=True, separators=(",", ":"), ensure_ascii=False
    ).encode("utf-8")


def sha256_hex(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def moment_text(moment: datetime) -> str:
    """A moment as it is hashed: UTC, always six decimals, closed by Z."""
    text = moment.astimezone(UTC).isoformat(timespec="microseconds")
    return text.removesuffix("+00:00") + "Z"


def moment_of(text: str) -> datetime:
    return datetime.fromisoformat(text)


def _refuse_inexact(value: Any) -> None:
    match value:
        case None | bool():
            return
        case str():
            if not value.isascii() and any("\ud800" <= c <= "\udfff" for c in value):
                raise ValueError("A text holds half of a surrogate pair.")
        case int():
            if abs(value) > LARGEST_EXACT:
                raise ValueError(f"{value} is too large; write it as a string.")
        case dict():
            for key, item in value.items():
                if not (isinstance(key, str) and key.isascii()):
                    raise ValueError(f"Key {key!r} is not plain ASCII.")
                _refuse_inexact(item)
        case list() | tuple():
            for item in value:
                _refuse_inexact(item)
        case _:
            raise ValueError(f"{type(value).__name__} has no place in the record.")
