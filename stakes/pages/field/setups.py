"""Setups: open one of each sort, look at it, re-check it, close it."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse

from stakes.actions.setups import close_setup, open_setup, recheck_setup
from stakes.can import Can, needs
from stakes.forms.field.setups import FORMS, SORTS, OpenForm, RecheckForm
from stakes.pages.field.answering import answered, passage_of
from stakes.pages.field.explained import setup_checks
from stakes.pages.field.signs import row
from stakes.pages.field.where import page, sent, state_of, to, visit_of
from stakes.queries import setups as asked_setups
from stakes.queries.setups import SetupStory, open_setups
from stakes.record import Refused

TITLES = {
    "station": "Total station on a mark",
    "free": "Free station",
    "satellite": "Satellite session",
    "level": "Level run",
    "tape": "Tape",
    "string": "String",
    "laser": "Laser",
}
NOTES = {
    "station": "Measure to one more mark: the one oriented on proves nothing.",
    "free": "Sight three marks, and check on one more that is not among them.",
    "satellite": "Check on a known mark that is not in the fit, now and at the end. Not "
    "for finish grade, anchor rods or pipe grade without a levelled check.",
    "level": "Read a second benchmark, or close the run on the first.",
    "tape": "Check it on a distance that is known.",
    "string": "Check it on a third mark of the line.",
    "laser": "Read a second benchmark.",
}


@needs(Can.RECORD)
def setups(request: HttpRequest, job: str) -> HttpResponse:
    state = state_of(request)
    closed = [s for s in state.setups.values() if s.closed_at is not None]
    closed.sort(key=lambda s: s.closed_at, reverse=True)
    return page(
        request,
        "setups.html",
        setups=open_setups(state),
        closed=closed[:20],
        sorts=list(TITLES.items()),
    )


@needs(Can.RECORD)
def setup_open(request: HttpRequest, job: str, sort: str) -> HttpResponse:
    if sort not in FORMS:
        raise Http404("There is no such sort of setup.")
    form: OpenForm = FORMS[sort](
        sent(request),
        state=state_of(request),
        visit=visit_of(request),
        sort=SORTS[sort],
    )

    def do(_photos: tuple[str, ...]) -> str:
        said = form.cleaned_data
        setup = open_setup(
            **form.said(),
            **form.more(),
            sort=SORTS[sort],
            used=form.used(),
            checks=form.checks(),
            by=request.asked.by,
            instrument=said["instrument"],
            serial=said["serial"],
            calibrated_on=said["calibrated_on"],
            weather=said["weather"],
            remark=said["remark"],
            passage=passage_of(request, form),
        )
        return to(request, "setup", setup=setup)

    return answered(
        request,
        form,
        "setup_open.html",
        do,
        done="Setup opened.",
        back=to(request, "setups"),
        title=TITLES[sort],
        note=NOTES[sort],
        labels=labels_of(request),
    )


@needs(Can.RECORD)
def setup(request: HttpRequest, job: str, setup: UUID) -> HttpResponse:
    story = _story(request, setup)
    state = state_of(request)
    return page(
        request,
        "setup.html",
        story=story,
        checks=setup_checks(story, state),
        used=[(u.role, row(state.marks[u.mark])) for u in story.opened.used],
        stakes=[(one, row(one.view)) for one in story.stakes],
        current=next((s for s in open_setups(state) if s.row.key == setup), None),
    )


@needs(Can.RECORD)
def setup_recheck(request: HttpRequest, job: str, setup: UUID) -> HttpResponse:
    return _later(request, setup, closing=False)


@needs(Can.RECORD)
def setup_close(request: HttpRequest, job: str, setup: UUID) -> HttpResponse:
    return _later(request, setup, closing=True)


def _later(request: HttpRequest, setup: UUID, *, closing: bool) -> HttpResponse:
    story = _story(request, setup)
    form = RecheckForm(
        sent(request),
        state=state_of(request),
        visit=visit_of(request),
        sort=story.row.sort,
    )

    def do(_photos: tuple[str, ...]) -> str:
        act = close_setup if closing else recheck_setup
        act(
            **form.said(),
            setup=setup,
            checks=form.checks(),
            by=request.asked.by,
            remark=form.cleaned_data["remark"],
        )
        return to(request, "setup", setup=setup)

    return answered(
        request,
        form,
        "setup_check.html",
        do,
        done="Setup closed." if closing else "Re-check recorded.",
        back=to(request, "setup", setup=setup),
        story=story,
        closing=closing,
        labels=labels_of(request),
    )


def _story(request: HttpRequest, setup: UUID) -> SetupStory:
    try:
        return asked_setups.story(state_of(request), setup)
    except Refused as refused:
        raise Http404(str(refused)) from refused


def labels_of(request: HttpRequest) -> list[str]:
    """Suggestions while a mark is typed: control first, no more than a phone can hold."""
    views = state_of(request).marks.values()
    ordered = sorted(views, key=lambda v: (not v.plan.is_control, v.label))
    return [view.label for view in ordered[:300]]
