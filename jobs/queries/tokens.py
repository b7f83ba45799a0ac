"""Who a token belongs to."""

from __future__ import annotations

import hashlib

from django.http import HttpRequest
from django.utils import timezone

from jobs.models import Token


class UnknownToken(Exception):
    """A token was sent that opens nothing."""


def token_hash(secret: str) -> str:
    """What is kept of a token. It is random and long, so one plain hash is enough."""
    return hashlib.sha256(secret.encode()).hexdigest()


def bearer(request: HttpRequest) -> Token | None:
    """The token a request carries; None when it carries none.

    Raises UnknownToken rather than fall back to the session: whoever sends a token
    means it.
    """
    header = request.headers.get("Authorization", "")
    if not header.lower().startswith("bearer "):
        return None
    found = (
        Token.objects.select_related("person")
        .filter(sha256=token_hash(header[7:].strip()), revoked_at=None)
        .first()
    )
    if found is None or not found.person.is_active:
        raise UnknownToken
    _note_use(found)
    return found


def _note_use(token: Token) -> None:
    """Once a day is enough to see which tokens are forgotten."""
    today = timezone.now().date()
    if token.used_on != today:
        Token.objects.filter(pk=token.pk).update(used_on=today)
