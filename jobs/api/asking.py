"""What a request for data may ask: a moment, a limit; and how a refusal is answered."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import Any

from rest_framework.request import Request
from rest_framework.response import Response

from stakes.can import Asked
from stakes.pages.moment import Moment, moment_of
from stakes.record import KINDS, Refused

MOST = 500

UNREADABLE = frozenset(
    {"unreadable", "unreadable facts", "unreadable moment", "unknown kind", "too many"}
)
"""Codes of what cannot be judged at all; the others are a no to what was understood."""


def refusals(view: Callable[..., Response]) -> Callable[..., Response]:
    """A Refused becomes 409 with its sentences and code, or 422 when unreadable."""

    @wraps(view)
    def answered(request: Request, *args: Any, **kwargs: Any) -> Response:
        try:
            return view(request, *args, **kwargs)
        except Refused as refused:
            status = 422 if refused.code in UNREADABLE else 409
            return Response(refusal(refused), status=status)

    return answered


def refusal(refused: Refused) -> dict[str, str]:
    return {
        "code": refused.code,
        "what": refused.what,
        "where": refused.where,
        "do": refused.do,
        "field": refused.field,
    }


def asked(request: Request) -> Asked:
    """The door's answer."""
    found: Asked = request._request.asked  # type: ignore[attr-defined]
    return found


def moment(request: Request) -> Moment:
    try:
        return moment_of(request._request, asked(request).record)
    except OverflowError as error:
        raise _unreadable("No job has such a year.", "at") from error
    except Refused as refused:
        refused.code = "unreadable"
        raise


def limit(request: Request) -> int:
    return max(1, min(MOST, number(request, "limit", MOST)))


def number(request: Request, name: str, default: int) -> int:
    text = request.query_params.get(name, "")
    if not text:
        return default
    if not (text.isascii() and text.isdigit() and len(text) < 16):
        raise _unreadable(f"{text[:40]!r} is not a whole number.", name)
    return int(text)


def known_kind(kind: str) -> str:
    if kind not in KINDS:
        raise _unreadable(f"There is no kind of entry called {kind[:60]!r}.", "kind")
    return kind


def _unreadable(what: str, field: str) -> Refused:
    return Refused(what, field=field, code="unreadable")
