"""Check stakes: choose the sort, type what was measured, read the verdict."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse

from stakes.actions.checking import check_stakes
from stakes.can import Can, needs
from stakes.forms.field.checking import WORDS, CheckForm
from stakes.kinds.checking import StakeChecked
from stakes.pages.field.answering import answered
from stakes.pages.field.explained import numbers_of, worth_of
from stakes.pages.field.setups import labels_of
from stakes.pages.field.signs import row
from stakes.pages.field.where import files, page, sent, state_of, to, visit_of
from stakes.queries.setups import usable_setups
from stakes.queries.stake_checks import NEEDS
from stakes.queries.state import MarkView
from stakes.record import reading


@needs(Can.RECORD)
def check_choose(request: HttpRequest, job: str) -> HttpResponse:
    view = _named(request)
    return page(request, "check_choose.html", view=view, sorts=list(WORDS.items()))


@needs(Can.RECORD)
def check_make(request: HttpRequest, job: str, sort: str) -> HttpResponse:
    if sort not in NEEDS:
        raise Http404("There is no such sort of check.")
    view, state = _named(request), state_of(request)
    form = CheckForm(
        sent(request),
        files(request),
        state=state,
        visit=visit_of(request),
        sort=sort,
        setups=usable_setups(state),
        initial={"mark1": view.label} if view else {},
    )

    def do(photos: tuple[str, ...]) -> str:
        said = form.cleaned_data
        check = check_stakes(
            **form.said(),
            sort=sort,  # type: ignore[arg-type]
            marks=form.marks(),
            asked=form.asked(),
            by=request.asked.by,
            setup=form.setup(),
            method=said["method"],
            instrument=said["instrument"],
            against=said.get("against", ""),
            existing=said.get("existing") != "no",
            remark=said["remark"],
            photos=photos,
        )
        return to(request, "check", check=check)

    back = to(request, "mark", mark=view.key) if view else to(request, "home")
    return answered(
        request,
        form,
        "check_make.html",
        do,
        back=back,
        title=WORDS[sort],
        view=view,
        labels=labels_of(request),
    )


@needs(Can.RECORD)
def check(request: HttpRequest, job: str, check: UUID) -> HttpResponse:
    """A check explains itself."""
    state = state_of(request)
    said = reading.entries(
        state.record, thing="check", key=check, kinds=[StakeChecked.KIND]
    )
    if not said:
        raise Http404("There is no such check on this job.")
    counted = said[-1]
    fact = counted.fact
    assert isinstance(fact, StakeChecked)
    place = fact.sort == "position"
    return page(
        request,
        "check.html",
        counted=counted,
        fact=fact,
        title=WORDS[fact.sort],
        numbers=numbers_of(fact.judgement, state.record.length_unit, place=place),
        worth=worth_of(fact),
        rows=[row(state.marks[m]) for m in fact.listed if m in state.marks],
        others=[row(state.marks[m]) for m in fact.other if m in state.marks],
    )


def _named(request: HttpRequest) -> MarkView | None:
    """The mark the check was begun from."""
    try:
        return state_of(request).marks.get(UUID(request.GET.get("mark", "")))
    except ValueError:
        return None
