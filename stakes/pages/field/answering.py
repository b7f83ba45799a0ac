"""How a form of the field answers: shown, mended, stopped at a gate, or done."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect

from stakes.actions import photos
from stakes.actions.passing import Gated, Passage
from stakes.can import Can
from stakes.forms.field.asking import FieldForm, KeptPhotos, refuse_on
from stakes.pages.field.where import page
from stakes.queries.gates import Gate
from stakes.record import Refused

PASSAGE = ("authorised_by", "how", "done_already")


class SeeOther(HttpResponseRedirect):
    """Done: look at the page that shows it."""

    status_code = 303


def answered(
    request: HttpRequest,
    form: FieldForm,
    template: str,
    do: Callable[[tuple[str, ...]], str],
    *,
    done: str = "",
    back: str,
    **context: Any,
) -> HttpResponse:
    """Show a form; when it was sent and holds, `do` it and go where that says.

    `do` is given the photos that came with it. What a gate stops is carried to the
    page of the gate, so that nothing typed is lost.
    """
    kept: list[str] = []
    mending = "mend" in request.POST
    if form.is_bound:
        signed = KeptPhotos(form.record)
        kept = signed.read(request.POST.getlist("kept"))
        valid = form.is_valid()
        try:
            kept += photos.keep_all(form.cleaned_data.get("photos") or [])
            if valid and not mending:
                target = do(tuple(dict.fromkeys(kept)))
                if done:
                    messages.success(request, done)
                return SeeOther(target)
        except Gated as gated:
            return stopped(request, gated.gates, signed.sign(kept), back)
        except Refused as refused:
            refuse_on(form, refused)
        context |= {"kept": list(zip(kept, signed.sign(kept), strict=True))}
    status = 422 if form.is_bound and not mending else 200
    return page(request, template, status, form=form, back=back, **context)


def stopped(
    request: HttpRequest,
    gates: Sequence[Gate],
    kept: Sequence[str],
    back: str,
    **context: Any,
) -> HttpResponse:
    """The page of a gate: why it stops, and what may be done.

    Before anything was typed only the answer is sent on (`gate_answer`); afterwards the
    whole form is carried along.
    """
    carried = [
        (name, value)
        for name, values in request.POST.lists()
        for value in values
        if name not in ("csrfmiddlewaretoken", "kept", "mend", *PASSAGE)
    ]
    carried += [("kept", text) for text in kept]
    if request.method == "GET":
        carried.append(("gate_answer", "yes"))
    return page(
        request,
        "gate.html",
        409 if request.method == "POST" else 200,
        gates=gates,
        hard=any(gate.hard for gate in gates),
        typed=request.method == "POST",
        may_proceed=request.asked.can(Can.PROCEED_HELD),  # type: ignore[attr-defined]
        carried=carried,
        said={name: request.POST.get(name, "") for name in PASSAGE},
        tried=bool(request.POST.get("authorised_by") or request.POST.get("how")),
        back=back,
        **context,
    )


def passage_of(request: HttpRequest, form: FieldForm) -> Passage:
    """What was said about the gates; only who may proceed held can authorise."""
    said = form.cleaned_data
    may = request.asked.can(Can.PROCEED_HELD)  # type: ignore[attr-defined]
    return Passage(
        authorised_by=said.get("authorised_by", "") if may else "",
        how=said.get("how", "") if may else "",
        done=bool(said.get("done_already")),
    )
