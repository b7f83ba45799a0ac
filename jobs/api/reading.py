"""What may be read: jobs, marks, history, record, checks, visits, handovers, holds."""

from __future__ import annotations

from typing import Any
from uuid import UUID

from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.exceptions import NotFound
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import wire
from jobs.api.asking import asked, limit, moment, number, refusals
from jobs.declared import Who, open_to
from jobs.pages.handovers import handovers_seen
from jobs.pages.holds import holds_seen
from jobs.queries.jobs import jobs_of
from jobs.queries.visits import visits_seen
from stakes.can import Can, needs
from stakes.models import Check, Entry
from stakes.queries import ways
from stakes.queries.drawing import in_order
from stakes.queries.state import job_state
from stakes.record import entries
from stakes.record.reading import corrections, decoded

ANYTHING = extend_schema(responses={200: OpenApiTypes.OBJECT})


@open_to(Who.SIGNED_IN)
@ANYTHING
@api_view(["GET"])
def jobs(request: Request) -> Response:
    """The jobs whoever asks has a seat on."""
    found = [
        {"number": job.record.number, "name": job.name, "unit": job.record.unit}
        for job in jobs_of(request.user)
    ]
    return Response({"jobs": found})


@needs(Can.READ)
@extend_schema(operation_id="jobs_marks_list", responses={200: OpenApiTypes.OBJECT})
@api_view(["GET"])
@refusals
def marks(request: Request, job: str) -> Response:
    """Marks as they stand (?at=&known=&standing=&trust=&limit=&after=label)."""
    record, at = asked(request).record, moment(request)
    state = job_state(record, at.at, at.known)
    wanted = request.query_params
    found = [
        view
        for view in in_order(state.marks.values())
        if wanted.get("standing", "") in ("", str(view.standing))
        and wanted.get("trust", "") in ("", str(view.trust.trust))
    ]
    start = number(request, "after", 0)
    part = found[start : start + limit(request)]
    following = start + len(part)
    return Response(
        {
            "as_of": at.words,
            "head": record.head,
            "marks": [wire.mark(view, record) for view in part],
            "next": following if following < len(found) else None,
        }
    )


@needs(Can.READ)
@ANYTHING
@api_view(["GET"])
@refusals
def mark(request: Request, job: str, mark: UUID) -> Response:
    """One mark as it stands."""
    record, at = asked(request).record, moment(request)
    view = job_state(record, at.at, at.known).marks.get(mark)
    if view is None:
        raise NotFound
    return Response({"as_of": at.words, "mark": wire.mark(view, record)})


@needs(Can.READ_RECORD)
@ANYTHING
@api_view(["GET"])
@refusals
def history(request: Request, job: str, mark: UUID) -> Response:
    """Everything said of a mark, in the order of the facts."""
    at = moment(request)
    said = entries(
        asked(request).record, mark=mark, at=at.at, known=at.known, all_said=True
    )
    if not said:
        raise NotFound
    return Response({"as_of": at.words, "entries": [wire.entry(c) for c in said]})


@needs(Can.READ)
@ANYTHING
@api_view(["GET"])
@refusals
def ways_back(request: Request, job: str, mark: UUID) -> Response:
    """Every way to put a mark back, ranked, refused ones with their reason."""
    state = job_state(asked(request).record)
    if mark not in state.marks:
        raise NotFound
    found = ways.ways_for(state, mark)
    listed = [
        {
            "rank": way.rank,
            "kind": str(way.kind),
            "component": way.component,
            "offered": way.offered,
            "reason": way.reason,
            "marks": [found.labels.get(key, key) for key in way.marks],
            "numbers": [ways.number_words(found, n) for n in way.numbers],
            "checks": [
                {
                    "check": ways.check_words(found, c),
                    "expect": ways.expected_words(found, c),
                }
                for c in way.checks
            ],
            "within_95": ways.size_words(found, way.semi_major_m),
            "cautions": [caution.value for caution in way.cautions],
        }
        for way in found.ways
    ]
    return Response({"mark": found.view.label, "ways": listed})


@needs(Can.READ_RECORD)
@ANYTHING
@api_view(["GET"])
def checks(request: Request, job: str) -> Response:
    """Checks of stakes as they are judged now, the latest first."""
    rows = Check.objects.filter(record=asked(request).record).order_by("-made_at")
    return Response({"checks": list(rows.values()[: limit(request)])})


@needs(Can.SEE_VISITS)
@ANYTHING
@api_view(["GET"])
def visits(request: Request, job: str) -> Response:
    """Visits the reader may see."""
    found = visits_seen(asked(request))
    named = ("key", "crew", "starts_at", "ends_at", "arrived_at", "left_at", "ticket")
    return Response({"visits": list(found.values(*named)[: limit(request)])})


@needs(Can.READ)
@ANYTHING
@api_view(["GET"])
def handovers(request: Request, job: str) -> Response:
    """Handovers the reader may see."""
    return _rows("handovers", handovers_seen(asked(request)), request)


@needs(Can.SEE_HOLDS)
@ANYTHING
@api_view(["GET"])
def holds(request: Request, job: str) -> Response:
    """Holds the reader may see."""
    found = [
        {
            "key": str(hold.key),
            "in_force": hold.in_force,
            "words": hold.words,
            "sent_at": wire.moment(hold.sent_at),
            "lifted_at": wire.moment(hold.lifted_at),
        }
        for hold in holds_seen(asked(request))
    ]
    return Response({"holds": found[: limit(request)]})


def _rows(name: str, found: Any, request: Request) -> Response:
    skipped = ("record_id",)
    rows = [
        {k: v for k, v in row.items() if k not in skipped}
        for row in found.values()[: limit(request)]
    ]
    return Response({name: rows})


def record_after(request: Request) -> Response:
    """Entries after a number, in order, each with its hashed body."""
    record = asked(request).record
    after = number(request, "after", 0)
    rows = Entry.objects.filter(record=record, number__gt=after).order_by("number")
    overruled = corrections(record)
    found = [wire.entry(decoded(e, overruled)) for e in rows[: limit(request)]]
    last = found[-1]["number"] if found else after
    return Response({"head": record.head, "entries": found, "next": last})
