"""What the OpenAPI description says of the door: a bearer's token, or the session."""

from __future__ import annotations

from typing import Any

from drf_spectacular.extensions import OpenApiAuthenticationExtension


class DoorScheme(OpenApiAuthenticationExtension):
    """Registers itself by being imported."""

    target_class = "jobs.door.DoorAuthentication"
    name = ["token", "session"]

    def get_security_definition(self, auto_schema: Any) -> list[dict[str, str]]:
        return [
            {"type": "http", "scheme": "bearer"},
            {"type": "apiKey", "in": "cookie", "name": "sessionid"},
        ]
