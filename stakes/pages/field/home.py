"""The crew's home on a job: marks by what needs doing, and the setups that are open."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.utils import timezone

from stakes.can import Can, needs
from stakes.forms.field.asking import find
from stakes.kinds.setting import StakeSet
from stakes.pages.field.answering import SeeOther
from stakes.pages.field.photos import photos_of
from stakes.pages.field.signs import (
    plan_numbers,
    row,
    shown,
    sign_of,
    staked_numbers,
    state_words,
)
from stakes.pages.field.where import page, state_of, to
from stakes.queries import locates, setups
from stakes.queries.before_setting import before_setting
from stakes.queries.field_lists import NAMES, groups
from stakes.queries.labels import places, planned_row
from stakes.queries.setups import open_setups
from stakes.queries.state import MarkView

VERBS = (
    ("undisturbed", "Seen, looks undisturbed"),
    ("gone", "Gone"),
    ("lath-down", "Lath down, hub there"),
    ("leaning", "Leaning"),
    ("hit", "Hit"),
    ("put-back", "Put back by others"),
)
"""What may be said of one mark or of several at once, in the order it is needed."""


@needs(Can.RECORD)
def home(request: HttpRequest, job: str) -> HttpResponse:
    state = state_of(request)
    query = request.GET.get("q", "")[:60]
    exact = find(state, query) if query.strip() else None
    if exact is not None:
        return SeeOther(to(request, "mark", mark=exact.key))
    only = request.GET.get("group", "")
    only = only if only in dict(NAMES) else ""
    now = timezone.now()
    ticket = next((t for t in locates.tickets(state.record) if not t.lacks(now)), None)
    return page(
        request,
        "home.html",
        groups=[
            (group, [row(view) for view in group.views])
            for group in groups(state, only, query)
        ],
        only=only,
        query=query,
        total=len(state.marks),
        setups=open_setups(state),
        ticket=ticket,
        hazards=locates.hazards(state.record),
        verbs=VERBS,
    )


@needs(Can.RECORD)
def several(request: HttpRequest, job: str) -> HttpResponse:
    """From ticked marks and a verb to the page that asks the rest."""
    what = request.GET.get("what", "")
    marks = [f"mark={m}" for m in request.GET.getlist("mark") if _is_uuid(m)]
    if what not in dict(VERBS) or not marks:
        return SeeOther(to(request, "home"))
    url = to(request, "found", what=what)
    joined = "&".join(marks)
    return SeeOther(f"{url}{'&' if '?' in url else '?'}{joined}")


@needs(Can.RECORD)
def mark(request: HttpRequest, job: str, mark: UUID) -> HttpResponse:
    view = view_of(request, mark)
    state = state_of(request)
    return page(
        request,
        "mark.html",
        view=view,
        plan=plan_numbers(view, state.record.length_unit),
        sign=sign_of(view, 34),
        said=state_words(view),
        standing=view.standing in ("standing", "disturbed"),
        verbs=VERBS[1:],
        planned=planned_row(view.plan),
        fact=setups.set_fact(state, view),
        photos=photos_of(state.record, mark),
        before=before_setting(
            state, mark, person=request.asked.by.person, another_way="not chosen yet"
        ),
    )


@needs(Can.RECORD)
def label(request: HttpRequest, job: str, mark: UUID) -> HttpResponse:
    """What to write on the stake that was set."""
    view = view_of(request, mark)
    fact = setups.set_fact(state_of(request), view)
    unit = request.asked.record.length_unit
    more: dict[str, object] = {}
    if isinstance(fact, StakeSet):
        more = {
            "lines": fact.label.split(" / "),
            "staked": staked_numbers(fact, unit),
            "cut": shown(abs(int(fact.cut.nm)), unit, places(unit)) if fact.cut else "",
        }
    following = [
        row(v) for group in groups(state_of(request), only="set") for v in group.views
    ][:5]
    return page(
        request, "label.html", view=view, fact=fact, following=following, **more
    )


def view_of(request: HttpRequest, mark: UUID) -> MarkView:
    """The mark of this job, or no page at all."""
    view = state_of(request).marks.get(mark)
    if view is None:
        raise Http404("There is no such mark on this job.")
    return view


def _is_uuid(text: str) -> bool:
    try:
        UUID(text)
    except ValueError:
        return False
    return True
