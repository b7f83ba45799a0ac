"""How an entry points at photos: by the SHA-256 of the file as it was received."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

from stakes.record.kinds import MatterLink


def photo_key(sha256: str) -> UUID:
    """The key under which the record knows a photo: the first half of its SHA-256.

    >>> str(photo_key("00" * 31 + "ff"))
    '00000000-0000-0000-0000-000000000000'
    """
    return UUID(hex=sha256[:32])


def photo_links(photos: Iterable[str]) -> list[MatterLink]:
    """So that whoever may read a record may see its photos, and no others."""
    return [MatterLink("photo", photo_key(sha256)) for sha256 in photos]
