"""JSON bodies: of a bearable size and depth, else refused with a sentence."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from django.core.exceptions import RequestDataTooBig
from rest_framework.exceptions import APIException, ParseError
from rest_framework.parsers import JSONParser
from rest_framework.request import Request

DEEPEST = 40


class BoundedJSON(JSONParser):
    """The usual parser, which nesting cannot break."""

    def parse(
        self,
        stream: Any,
        media_type: str | None = None,
        parser_context: Mapping[str, Any] | None = None,
    ) -> Any:
        try:
            found = super().parse(stream, media_type, parser_context)
        except (RecursionError, LookupError) as error:
            raise ParseError("The JSON is nested too deep or oddly encoded.") from error
        if _deeper(found, DEEPEST):
            raise ParseError("The JSON is nested too deep.")
        return found


class Unreadable(APIException):
    """The body as a whole says nothing that could be judged."""

    status_code = 422
    default_code = "unreadable"


class TooLarge(APIException):
    """Django refused to read a body of this size."""

    status_code = 413
    default_code = "too large"


def body_of(request: Request) -> Any:
    """The parsed body; 422 with a sentence when it is no JSON, 413 when too large."""
    try:
        return request.data
    except RequestDataTooBig as error:
        raise TooLarge("This is more than can be taken at once: send less.") from error
    except ParseError as error:
        raise Unreadable(error.detail) from error


def _deeper(value: Any, left: int) -> bool:
    inner = value.values() if isinstance(value, dict) else value
    if not isinstance(value, dict | list):
        return False
    return left == 0 or any(_deeper(one, left - 1) for one in inner)
