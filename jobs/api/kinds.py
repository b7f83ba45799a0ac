"""What may be said by program, told to programs: every kind with its facts' schema."""

from __future__ import annotations

from typing import Any

import msgspec
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import shapes
from jobs.api.acts import Act, acts
from jobs.declared import Who, open_to


@open_to(Who.SIGNED_IN)
@extend_schema(responses=shapes.Kinds)
@api_view(["GET"])
def kinds(request: Request) -> Response:
    """The kinds that may be sent as items, the right each takes, and its facts."""
    return Response({"kinds": [_told(act) for act in acts().values()]})


def _told(act: Act) -> dict[str, Any]:
    return {
        "kind": act.kind,
        "right": str(act.right),
        "words": (act.do.__doc__ or "").split("\n\n")[0],
        "facts": msgspec.json.schema(act.facts),
    }
