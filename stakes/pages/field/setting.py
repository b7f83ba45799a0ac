"""Set a stake: first what should hold, then where it came to stand, then its label."""

from __future__ import annotations

from uuid import UUID

from django.http import HttpRequest, HttpResponse

from stakes.actions.setting import set_stake
from stakes.can import Can, needs
from stakes.forms.field.setting import SetForm
from stakes.pages.field.answering import answered, passage_of, stopped
from stakes.pages.field.home import view_of
from stakes.pages.field.signs import plan_numbers, sign_of, state_words
from stakes.pages.field.where import files, sent, state_of, to, visit_of
from stakes.queries.before_setting import BREAKS_NO_GROUND, Before, before_setting
from stakes.queries.labels import planned_row
from stakes.queries.setups import usable_setups


@needs(Can.RECORD)
def set_page(request: HttpRequest, job: str, mark: UUID) -> HttpResponse:
    view, state = view_of(request, mark), state_of(request)
    setups = usable_setups(state)
    surface = bool(request.GET.get("surface") or request.POST.get("surface") == "True")
    before = _before(request, mark, surface)
    back = to(request, "mark", mark=mark)
    only_answer = request.POST.get("gate_answer") == "yes"
    if request.method == "GET" and before.gates:
        return stopped(request, before.gates, (), back, view=view, surface=surface)
    form = SetForm(
        None if only_answer else sent(request),
        None if only_answer else files(request),
        state=state,
        visit=visit_of(request),
        view=view,
        setups=setups,
        cautions=before.cautions,
        surface=surface,
        initial=_initial(request) if only_answer else {"setup": _chosen(request)},
    )

    def do(photos: tuple[str, ...]) -> str:
        said = form.cleaned_data
        set_stake(
            **form.said(),
            mark=mark,
            by=request.asked.by,
            setup=UUID(said["setup"]) if said["setup"] else None,
            holds=form.what_holds(),
            staked=form.staked(),
            elevation=said.get("elevation"),
            capped=said["capped"],
            old=said.get("old") or None,
            far=said["far"],
            acknowledged=said.get("acknowledged") or (),
            passage=passage_of(request, form),
            remark=said["remark"],
            photos=photos,
        )
        return to(request, "label", mark=mark)

    context = {
        "view": view,
        "plan": plan_numbers(view, state.record.length_unit),
        "sign": sign_of(view, 34),
        "ticked": request.POST.getlist("acknowledged"),
        "said": state_words(view),
        "before": before,
        "planned": planned_row(view.plan),
        "passing": _initial(request) if request.method == "POST" else {},
    }
    return answered(request, form, "set.html", do, back=back, **context)


def _before(request: HttpRequest, mark: UUID, surface: bool) -> Before:
    """Gates and cautions as they stand when the page is opened, for the usual setup."""
    state = state_of(request)
    chosen = _chosen(request)
    return before_setting(
        state,
        mark,
        setup=UUID(chosen) if chosen else None,
        holds=sorted(BREAKS_NO_GROUND)[0] if surface else "",
        person=request.asked.by.person,
        occasion=visit_of(request),
        at=None,
    )


def _chosen(request: HttpRequest) -> str:
    """The setup named in the address, or the one opened last; empty: none is open."""
    listed = usable_setups(state_of(request))
    asked = request.POST.get("setup", request.GET.get("setup", ""))
    if asked in [str(s.row.key) for s in listed]:
        return asked
    still_open = [str(s.row.key) for s in listed if s.row.closed_at is None]
    return still_open[0] if still_open else ""


def _initial(request: HttpRequest) -> dict[str, object]:
    """What was said on the page of the gate before anything was typed."""
    return {
        "authorised_by": request.POST.get("authorised_by", ""),
        "how": request.POST.get("how", ""),
        "done_already": request.POST.get("done_already") == "on" or None,
        "setup": _chosen(request),
    }
