"""Three taps for what was found: seen, lath down, leaning, hit, put back, gone."""

from __future__ import annotations

from typing import Any
from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse

from stakes.actions.condition import find_foreign_mark, report_gone, see_marks
from stakes.can import Can, needs
from stakes.forms.field.condition import (
    DisturbedForm,
    ForeignForm,
    FoundForm,
    GoneForm,
    SeenForm,
)
from stakes.pages.field.answering import SeeOther, answered
from stakes.pages.field.signs import row
from stakes.pages.field.where import files, sent, state_of, to, visit_of
from stakes.queries.state import MarkView

CONDITIONS = {
    "undisturbed": "undisturbed",
    "lath-down": "lath down, hub there",
    "leaning": "leaning",
    "hit": "hit",
    "put-back": "put back by others",
}
TITLES = {
    "undisturbed": "Seen, looks undisturbed",
    "lath-down": "Lath down, hub there",
    "leaning": "Leaning",
    "hit": "Hit",
    "put-back": "Put back by others",
    "gone": "Gone",
}
NOTES = {
    "undisturbed": "A sighting is no check: it says only that the stake was there.",
    "lath-down": "The lath is only the flag. If the hub stands, nothing is lost.",
    "put-back": "It is in question until a check from control passes.",
    "gone": "The record keeps when it was last seen and when it was first missing.",
}


@needs(Can.RECORD)
def found(request: HttpRequest, job: str, what: str) -> HttpResponse:
    if what not in TITLES:
        raise Http404("Nothing is recorded under this word.")
    views = _views(request)
    if not views:
        return SeeOther(to(request, "home"))
    kind = _form(what)
    start = {"mark": [str(view.key) for view in views]}
    form = kind(
        sent(request),
        files(request),
        state=state_of(request),
        visit=visit_of(request),
        initial=start,
    )

    def do(photos: tuple[str, ...]) -> str:
        _say(request, form, what, views, photos)
        return _after(request, views)

    return answered(
        request,
        form,
        "found.html",
        do,
        done=f"{_names(views)}: {TITLES[what].lower()}. Recorded.",
        back=_after(request, views),
        title=TITLES[what],
        note=NOTES.get(what, ""),
        rows=[row(view) for view in views],
    )


@needs(Can.RECORD)
def foreign(request: HttpRequest, job: str) -> HttpResponse:
    form = ForeignForm(
        sent(request),
        files(request),
        state=state_of(request),
        visit=visit_of(request),
    )

    def do(photos: tuple[str, ...]) -> str:
        said = form.cleaned_data
        names = ("label", "words", "set_by", "northing", "easting", "elevation")
        mark = find_foreign_mark(
            **form.said(),
            **{name: said[name] for name in (*names, "remark")},
            by=request.asked.by,
            photos=photos,
        )
        return to(request, "mark", mark=mark)

    return answered(
        request,
        form,
        "found.html",
        do,
        done="Foreign mark recorded. It is a basis for nothing until it is adopted.",
        back=to(request, "home"),
        title="Foreign mark found",
        note="Set by others: it may be shot and compared, never built or set from.",
        rows=[],
    )


def _form(what: str) -> type[FoundForm]:
    if what == "gone":
        return GoneForm
    return SeenForm if what in ("undisturbed", "lath-down") else DisturbedForm


def _say(
    request: HttpRequest,
    form: FoundForm,
    what: str,
    views: list[MarkView],
    photos: tuple[str, ...],
) -> None:
    said = form.cleaned_data
    given: dict[str, Any] = {
        **form.said(),
        "marks": [view.key for view in views],
        "by": request.asked.by,
        "cause": form.the_cause(),
        "told_by": said["told_by"],
        "remark": said["remark"],
        "photos": photos,
    }
    if what == "gone":
        report_gone(
            **given,
            witnessed=bool(said["witnessed"]),
            cause_by=said["cause_by"],
            disputed=said["disputed"],
            last_seen=said["last_seen"],
        )
    else:
        see_marks(
            **given,
            condition=CONDITIONS[what],
            components=said.get("components") or "pe",
        )


def _views(request: HttpRequest) -> list[MarkView]:
    """The marks named in the address or sent with the form, those of this job."""
    texts = request.POST.getlist("mark") or request.GET.getlist("mark")
    state, found = state_of(request), []
    for text in dict.fromkeys(texts[:1000]):
        try:
            view = state.marks.get(UUID(text))
        except ValueError:
            continue
        if view is not None:
            found.append(view)
    return found


def _after(request: HttpRequest, views: list[MarkView]) -> str:
    if len(views) == 1:
        return to(request, "mark", mark=views[0].key)
    return to(request, "home")


def _names(views: list[MarkView]) -> str:
    labels = [view.label for view in views]
    if len(labels) > 6:
        return f"{len(labels)} marks"
    return ", ".join(labels)
