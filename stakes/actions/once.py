"""Doing a thing once, however often it is sent: gloves tap twice, signals drop.

Whoever asks makes a key; it becomes the key of the act's first entry. The act's own id
is worked out from that key and from all that was asked, so that the same request again
finds its entries, and another request under the same key is told so and lost nowhere.
"""

from __future__ import annotations

import hashlib
import uuid
from collections.abc import Callable, Mapping
from typing import Any

import msgspec

from stakes.models import Entry, Record
from stakes.record import Refused

Act = uuid.UUID


def once(
    record: Record,
    key: uuid.UUID,
    asked: Mapping[str, Any],
    do: Callable[[Act], list[Entry]],
) -> list[Entry]:
    """The entries of this act: those of the first time, or what `do` appends now.

    `asked` is everything the act was asked with. Raises Refused when the key was used
    before for something else.
    """
    act = act_of(key, asked)
    if done := _done(record, key, act):
        return done
    try:
        return do(act)
    except Refused as refused:
        # Two taps at one moment: the other one got through between looking and writing.
        if refused.code == "conflict" and (done := _done(record, key, act)):
            return done
        raise


def act_of(key: uuid.UUID, asked: Mapping[str, Any]) -> Act:
    """One id for one key and one set of words."""
    words = msgspec.json.encode(msgspec.to_builtins(dict(asked)), order="sorted")
    return uuid.uuid5(key, hashlib.sha256(words).hexdigest())


def follows(key: uuid.UUID, name: str) -> uuid.UUID:
    """The key of another thing made by the same act: a setup, a check, a second entry."""
    return uuid.uuid5(key, name)


def _done(record: Record, key: uuid.UUID, act: Act) -> list[Entry]:
    first = Entry.objects.filter(record=record, key=key).first()
    if first is None:
        return []
    if first.act != act:
        raise Refused(
            "This form was sent before, with other words.",
            where=f"Entry {first.number} holds what was sent first.",
            do="To change that, correct the entry. To record something more, open the "
            "form again.",
            code="conflict",
        )
    return list(Entry.objects.filter(record=record, act=act).order_by("number"))
