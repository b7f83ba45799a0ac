"""Doing what a form asks once, however often its button is pressed.

The form carries a key made when it was shown. Without one, as from a program that
keeps its own order, an act is simply done.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any
from uuid import UUID, uuid4

from stakes.actions.once import Act, once
from stakes.models import Entry, Record


def keyed(
    record: Record,
    key: UUID | None,
    asked: Mapping[str, Any],
    do: Callable[[Act], list[Entry]],
) -> list[Entry]:
    """The entries of this act, those of the first time when it is sent again."""
    return do(uuid4()) if key is None else once(record, key, asked, do)
