"""Marks to take away: GeoJSON and comma text, as of any moment, numbers as text."""

from __future__ import annotations

from collections.abc import Callable

from django.http import HttpResponse
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import shapes
from jobs.api.asking import asked, moment, refusals
from jobs.queries.terms import terms_at, today
from stakes.can import Can, needs
from stakes.exchange.geojson import geojson as as_geojson
from stakes.exchange.writing import comma_file
from stakes.queries.state import JobState, job_state


@needs(Can.READ, Can.EXPORT)
@extend_schema(
    parameters=shapes.MOMENT,
    responses={(200, "application/geo+json"): OpenApiTypes.OBJECT},
)
@api_view(["GET"])
@refusals
def geojson(request: Request, job: str) -> Response | HttpResponse:
    """Every mark as a feature without geometry; its place is in the properties."""
    return _file(request, as_geojson, "application/geo+json", "geojson")


@needs(Can.READ, Can.EXPORT)
@extend_schema(
    parameters=shapes.MOMENT, responses={(200, "text/csv"): OpenApiTypes.STR}
)
@api_view(["GET"])
@refusals
def comma(request: Request, job: str) -> Response | HttpResponse:
    """Every mark as a line, below a comment that says job, unit, frame and entry."""
    return _file(request, comma_file, "text/csv; charset=utf-8", "csv")


def _file(
    request: Request, write: Callable[[JobState, str], str], kind: str, ending: str
) -> HttpResponse:
    record, at = asked(request).record, moment(request)
    day = at.at.astimezone(record.time_zone).date() if at.at else today(record)
    frame = terms_at(record, day).frame
    state = job_state(record, at.at, at.known)
    text = write(state, frame.frame if frame else "")
    answer = HttpResponse(text, content_type=kind)
    answer.headers["Content-Disposition"] = f'attachment; filename="marks.{ending}"'
    return answer
