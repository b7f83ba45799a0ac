"""What every page knows of the house: the firm, the job it is in, where one may go."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from django.conf import settings
from django.http import HttpRequest

from jobs.places import places
from stakes.models import Record


@dataclass(frozen=True, slots=True)
class JobHeader:
    """The job a page is about, as its header shows it."""

    name: str
    record: Record


def house(request: HttpRequest) -> dict[str, Any]:
    """`firm`, and inside a job `job`, `seat` and `asked`; `places` everywhere."""
    found: dict[str, Any] = {"firm": settings.FIRM}
    # A page of an error can come from before the door.
    if not hasattr(request, "asked"):
        return found
    found["places"] = places(request)
    if request.asked is not None:
        asked = request.asked
        found |= {
            "asked": asked,
            "job": JobHeader(asked.job_name, asked.record),
            "seat": ", ".join(sorted(asked.roles)),
        }
    return found
