"""Marks to take away: GeoJSON and comma text, as of any moment, numbers as text.

A site grid is neither longitude and latitude nor tied to them, so RFC 7946 leaves no
honest geometry: it is null, and the place stands in the properties with its unit.
"""

from __future__ import annotations

import json
from collections.abc import Callable
from typing import Any

from django.http import HttpResponse
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import wire
from jobs.api.asking import asked, moment, refusals
from stakes.can import Can, needs
from stakes.exchange.writing import comma_text
from stakes.models import Record
from stakes.queries.drawing import UNIT_NAMES, in_order
from stakes.queries.state import JobState, MarkView, job_state

TEXT = {(200, "text/csv"): OpenApiTypes.STR}


@needs(Can.READ, Can.EXPORT)
@extend_schema(responses={(200, "application/geo+json"): OpenApiTypes.OBJECT})
@api_view(["GET"])
@refusals
def geojson(request: Request, job: str) -> Response | HttpResponse:
    """Every mark as a feature (?at=&known=)."""
    return _file(request, _collection, "application/geo+json", "geojson")


@needs(Can.READ, Can.EXPORT)
@extend_schema(responses=TEXT)
@api_view(["GET"])
@refusals
def comma(request: Request, job: str) -> Response | HttpResponse:
    """Every mark as a line, below a comment that says job, unit and entry."""
    return _file(request, _commented, "text/csv; charset=utf-8", "csv")


def _file(
    request: Request, write: Callable[[JobState], str], kind: str, ending: str
) -> HttpResponse:
    record, at = asked(request).record, moment(request)
    answer = HttpResponse(write(job_state(record, at.at, at.known)), content_type=kind)
    answer.headers["Content-Disposition"] = f'attachment; filename="marks.{ending}"'
    return answer


def _as_of_entry(state: JobState) -> int:
    return state.record.head if state.known is None else state.known


def _commented(state: JobState) -> str:
    # One line whatever the job is called: a number cannot smuggle in rows of its own.
    number = " ".join(state.record.number.split())
    unit = UNIT_NAMES[state.record.unit]
    said = f"# job {number}, unit {unit}, as of entry {_as_of_entry(state)}"
    return f"{said}\r\n{comma_text(state)}"


def _collection(state: JobState) -> str:
    features = [_feature(v, state.record) for v in in_order(state.marks.values())]
    return json.dumps(
        {
            "type": "FeatureCollection",
            "job": state.record.number,
            "as_of_entry": _as_of_entry(state),
            "features": features,
        },
        ensure_ascii=False,
    )


def _feature(view: MarkView, record: Record) -> dict[str, Any]:
    properties = wire.mark(view, record)
    properties["unit"] = UNIT_NAMES[record.unit]
    return {
        "type": "Feature",
        "id": str(view.key),
        "geometry": None,
        "properties": properties,
    }
