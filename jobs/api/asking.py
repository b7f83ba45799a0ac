"""What a request for data may ask: a moment, a limit; and how a refusal is answered."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import Any

from rest_framework.exceptions import ValidationError
from rest_framework.request import Request
from rest_framework.response import Response

from stakes.can import Asked
from stakes.pages.moment import Moment, moment_of
from stakes.record import Refused

MOST = 500


def refusals(view: Callable[..., Response]) -> Callable[..., Response]:
    """A Refused becomes 409 with its sentences and code."""

    @wraps(view)
    def answered(request: Request, *args: Any, **kwargs: Any) -> Response:
        try:
            return view(request, *args, **kwargs)
        except Refused as refused:
            return Response(refusal(refused), status=409)

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
        raise ValidationError({"at": "No job has such a year."}) from error


def limit(request: Request) -> int:
    return max(1, min(MOST, number(request, "limit", MOST)))


def number(request: Request, name: str, default: int) -> int:
    text = request.query_params.get(name, "")
    if not text:
        return default
    if not (text.isascii() and text.isdigit() and len(text) < 16):
        raise ValidationError({name: f"{text[:40]!r} is not a whole number."})
    return int(text)
