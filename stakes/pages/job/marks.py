"""Marks in a list, and the page of one mark."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render

from stakes.can import Can, needs
from stakes.drawings.signs import sign_svg
from stakes.drawings.timeline import Moment as Dot
from stakes.drawings.timeline import timeline
from stakes.models import Setup
from stakes.pages.moment import Moment, moment_of
from stakes.queries import history
from stakes.queries.drawing import in_order
from stakes.queries.provenance import rests_on, rests_on_it
from stakes.queries.state import MarkView, job_state
from stakes.record import Refused

SHOWN_AT_ONCE = 500


def _moment(request: HttpRequest) -> tuple[Moment, str]:
    try:
        return moment_of(request, request.asked.record), ""
    except Refused as refused:
        return Moment(), str(refused)


@needs(Can.READ)
def marks(request: HttpRequest, job: str) -> HttpResponse:
    moment, trouble = _moment(request)
    state = job_state(request.asked.record, moment.at, moment.known)
    wanted = {k: request.GET.get(k, "") for k in ("q", "standing", "trust", "purpose")}
    found = [v for v in in_order(state.marks.values()) if _fits(v, wanted)]
    context = {
        "rows": [row(v) for v in found[:SHOWN_AT_ONCE]],
        "more": max(0, len(found) - SHOWN_AT_ONCE),
        "total": len(state.marks),
        "wanted": wanted,
        "standings": ("planned", "standing", "disturbed", "gone", "retired"),
        "trusts": ("not checked", "checked", "in question", "failed", "superseded"),
        "purposes": ("control", "benchmark", "stake", "foreign"),
        "moment": moment.words,
        "shown_at": moment,
        "trouble": trouble,
    }
    return render(request, "stakes/job/marks.html", context)


def _fits(view: MarkView, wanted: dict[str, str]) -> bool:
    said = f"{view.label} {view.plan.words} {view.plan.line}".casefold()
    return (
        wanted["q"].strip().casefold() in said
        and wanted["standing"] in ("", str(view.standing))
        and wanted["trust"] in ("", str(view.trust.trust))
        and wanted["purpose"] in ("", view.plan.purpose)
    )


def row(view: MarkView) -> dict[str, object]:
    """A mark as lists show it: its sign, its words, and what makes it doubtful."""
    signs = (
        view.plan.purpose,
        str(view.standing),
        str(view.trust.trust),
        view.plan.carries,
    )
    return {"view": view, "sign": sign_svg(*signs, size=18)}


@needs(Can.READ)
def mark(request: HttpRequest, job: str, mark: UUID) -> HttpResponse:
    asked = request.asked
    moment, trouble = _moment(request)
    state = job_state(asked.record, moment.at, moment.known)
    view = state.marks.get(mark)
    if view is None:
        raise Http404
    lines = history.told_of_mark(asked, mark, moment.at, moment.known)
    context = {
        "view": view,
        "sign": row(view)["sign"],
        "lines": lines,
        "drawing": timeline([_dot(x) for x in lines], view.label),
        "below": rests_on(state, mark),
        "above": rests_on_it(state, mark),
        "labels": {v.key: v.label for v in state.marks.values()},
        "setup": _setup(state.setups, view),
        "moment": moment.words,
        "shown_at": moment,
        "trouble": trouble,
        "whole": asked.can(Can.READ_RECORD),
    }
    return render(request, "stakes/job/mark.html", context)


def _dot(line: history.Line) -> Dot:
    return Dot(
        at=line.said.happened_at,
        recorded_at=line.said.recorded_at,
        kind=line.said.kind,
        words=line.sentence,
        verdict=line.verdict,
        counts=line.counts,
        late=line.is_late,
    )


def _setup(setups, view: MarkView) -> Setup | None:
    return setups.get(view.stake.setup) if view.stake and view.stake.setup else None
