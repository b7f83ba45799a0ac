"""The site plan as a page and as a file, with the list that says the same."""

from __future__ import annotations

from uuid import UUID

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from stakes.can import Can, needs
from stakes.drawings.plan import draw
from stakes.drawings.signs import sentence, sign_svg
from stakes.pages.moment import Moment, moment_of
from stakes.queries.drawing import in_order, plan_of
from stakes.queries.state import JobState, MarkView, job_state
from stakes.record import Refused


@needs(Can.READ)
def plan(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    moment, trouble = _moment(request)
    state = job_state(record, moment.at, moment.known)
    drawing = draw(
        plan_of(state, f"Site plan of job {record.number}", _links(job, moment))
    )
    context = {
        "drawing": drawing,
        "state": state,
        "moment": moment.words,
        "shown_at": moment,
        "trouble": trouble,
        "care": _care(state),
        "legend": legend(state),
    }
    return render(request, "stakes/job/plan.html", context)


@needs(Can.READ)
def plan_svg(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    moment, _ = _moment(request)
    state = job_state(record, moment.at, moment.known)
    title = f"Site plan of job {record.number}, {moment.words}"
    answer = HttpResponse(
        draw(plan_of(state, title), standalone=True), content_type="image/svg+xml"
    )
    answer.headers["Content-Disposition"] = 'attachment; filename="site-plan.svg"'
    return answer


def _moment(request: HttpRequest) -> tuple[Moment, str]:
    try:
        return moment_of(request, request.asked.record), ""
    except Refused as refused:
        return Moment(), str(refused)


def _links(job: str, moment: Moment):
    tail = f"?{moment.query}" if moment.query else ""

    def href(mark: UUID) -> str:
        return reverse("stakes:mark", kwargs={"job": job, "mark": mark}) + tail

    return href


def _care(state: JobState) -> list[tuple[str, str, list[MarkView]]]:
    """What needs somebody's care, worst first; each matter with its marks."""
    views = in_order(state.marks.values())
    doubtful = ("in question", "failed")
    matters = [
        ("On hold, do not build from these", "held", lambda v: v.held_back),
        ("In question or failed", "in question", lambda v: v.trust.trust in doubtful),
        ("Gone", "gone", lambda v: v.standing == "gone"),
        ("Disturbed", "disturbed", lambda v: v.standing == "disturbed"),
        ("Old stake left beside the new one", "superseded", lambda v: v.state.doubled),
    ]
    found = [
        (words, tone, [v for v in views if is_so(v)]) for words, tone, is_so in matters
    ]
    return [matter for matter in found if matter[2]]


def legend(state: JobState) -> list[tuple[str, str]]:
    """The signs this plan uses, each with its words."""
    combos = {
        (v.plan.purpose, str(v.standing), str(v.trust.trust))
        for v in state.marks.values()
    }
    return [
        (sign_svg(*combo, size=16, title=""), sentence(*combo))
        for combo in sorted(combos)
    ]
