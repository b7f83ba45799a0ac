"""What may be read: jobs, marks, history, record, checks, visits, handovers, holds."""

from __future__ import annotations

from uuid import UUID

from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.exceptions import NotFound
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import shapes, wire
from jobs.api.asking import asked, known_kind, limit, moment, number, refusals
from jobs.declared import Who, open_to
from jobs.pages.handovers import handovers_seen
from jobs.pages.holds import holds_seen
from jobs.queries.jobs import jobs_of
from jobs.queries.visits import tasks_seen, visits_seen
from stakes.can import Can, needs
from stakes.models import Check, Entry, Mark
from stakes.queries import ways
from stakes.queries.drawing import in_order
from stakes.queries.history import told_of_mark
from stakes.queries.state import job_state
from stakes.record.reading import corrections, decoded


@open_to(Who.SIGNED_IN)
@extend_schema(responses=shapes.Jobs)
@api_view(["GET"])
def jobs(request: Request) -> Response:
    """The jobs whoever asks has a seat on."""
    found = [
        {"number": job.record.number, "name": job.name, "unit": job.record.unit}
        for job in jobs_of(request.user)
    ]
    return Response({"jobs": found})


@needs(Can.READ)
@extend_schema(
    operation_id="jobs_marks_list",
    parameters=shapes.MARKS_ASKED,
    responses=shapes.Marks,
)
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
@extend_schema(parameters=shapes.MOMENT, responses=shapes.MarkNow)
@api_view(["GET"])
@refusals
def mark(request: Request, job: str, mark: UUID) -> Response:
    """One mark as it stands."""
    record, at = asked(request).record, moment(request)
    view = job_state(record, at.at, at.known).marks.get(mark)
    if view is None:
        raise NotFound
    return Response({"as_of": at.words, "mark": wire.mark(view, record)})


@needs(Can.READ)
@extend_schema(parameters=shapes.MOMENT, responses=shapes.History)
@api_view(["GET"])
@refusals
def history(request: Request, job: str, mark: UUID) -> Response:
    """What was said of a mark, in the order of the facts, as its page tells it."""
    who, at = asked(request), moment(request)
    if not Mark.objects.filter(record=who.record, key=mark).exists():
        raise NotFound
    lines = told_of_mark(who, mark, at.at, at.known)
    whole = who.can(Can.READ_RECORD)
    told = [wire.line(one, with_entry=whole) for one in lines]
    return Response({"as_of": at.words, "lines": told})


@needs(Can.READ)
@extend_schema(responses=shapes.Ways)
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
@extend_schema(parameters=[shapes.LIMIT], responses=shapes.Checks)
@api_view(["GET"])
@refusals
def checks(request: Request, job: str) -> Response:
    """Checks of stakes as they are judged now, the latest first."""
    rows = Check.objects.filter(record=asked(request).record)
    found = rows.order_by("-made_at")[: limit(request)]
    return Response({"checks": [wire.columns(row, wire.CHECK) for row in found]})


@needs(Can.SEE_VISITS)
@extend_schema(parameters=[shapes.LIMIT], responses=shapes.Visits)
@api_view(["GET"])
@refusals
def visits(request: Request, job: str) -> Response:
    """Visits the reader may see, with their own tasks."""
    who = asked(request)
    found = tasks_seen(who, visits_seen(who)[: limit(request)])
    told = [
        wire.columns(visit, wire.VISIT) | {"tasks": [wire.task(t) for t in tasks]}
        for visit, tasks in found
    ]
    return Response({"visits": told})


@needs(Can.READ)
@extend_schema(parameters=[shapes.LIMIT], responses=shapes.Handovers)
@api_view(["GET"])
@refusals
def handovers(request: Request, job: str) -> Response:
    """Handovers the reader may see."""
    found = handovers_seen(asked(request))[: limit(request)]
    told = [wire.columns(row, wire.HANDOVER) for row in found]
    return Response({"handovers": told})


@needs(Can.SEE_HOLDS)
@extend_schema(parameters=[shapes.LIMIT], responses=shapes.Holds)
@api_view(["GET"])
@refusals
def holds(request: Request, job: str) -> Response:
    """Holds the reader may see."""
    found = holds_seen(asked(request))[: limit(request)]
    return Response({"holds": [wire.columns(row, wire.HOLD) for row in found]})


def record_after(request: Request) -> Response:
    """Entries after a number, in order, each with its hashed body."""
    record = asked(request).record
    after = number(request, "after", 0)
    rows = Entry.objects.filter(record=record, number__gt=after).order_by("number")
    if kind := request.query_params.get("kind", ""):
        rows = rows.filter(kind=known_kind(kind))
    overruled = corrections(record)
    found = [wire.entry(decoded(e, overruled)) for e in rows[: limit(request)]]
    last = found[-1]["number"] if found else after
    return Response({"head": record.head, "entries": found, "next": last})
