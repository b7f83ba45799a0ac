"""Points to take away: comma text and GeoJSON, as of any moment."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse

from stakes.can import Can, needs
from stakes.exchange.geojson import geojson as as_geojson
from stakes.exchange.writing import comma_text
from stakes.pages.moment import moment_of
from stakes.queries.state import JobState, job_state
from stakes.record import Refused


@needs(Can.READ, Can.EXPORT)
def comma(request: HttpRequest, job: str) -> HttpResponse:
    return _file(request, comma_text, "text/csv; charset=utf-8", "marks.csv")


@needs(Can.READ, Can.EXPORT)
def geojson(request: HttpRequest, job: str) -> HttpResponse:
    return _file(request, as_geojson, "application/geo+json", "marks.geojson")


def _file(request: HttpRequest, write, content_type: str, name: str) -> HttpResponse:
    record = request.asked.record
    try:
        moment = moment_of(request, record)
    except Refused as refused:
        return HttpResponse(str(refused), status=422, content_type="text/plain")
    state: JobState = job_state(record, moment.at, moment.known)
    answer = HttpResponse(write(state), content_type=content_type)
    answer.headers["Content-Disposition"] = (
        f'attachment; filename="{record.number}-{name}"'
    )
    return answer
