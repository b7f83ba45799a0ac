"""Control and benchmarks: values, last check, shelf life; adopting a value."""

from __future__ import annotations

import uuid

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils import timezone

from stakes.actions.answering import answer_doubt
from stakes.actions.control import adopt_value
from stakes.can import Asked, Can, needs
from stakes.forms.office.control import AdoptForm, AnswerDoubtForm
from stakes.models import Mark
from stakes.pages.answer import act
from stakes.pages.job.marks import row
from stakes.queries.control import (
    SHELF_LIFE,
    control_lines,
    disagreements,
    measured_work,
    set_on_old_value,
    values_of,
)
from stakes.queries.state import job_state


@needs(Can.READ_RECORD)
def control(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    state = job_state(record)
    lines = control_lines(state, timezone.now())
    works = measured_work(record)
    context = {
        "lines": [{"line": line, "sign": row(line.view)["sign"]} for line in lines],
        "expired": [line for line in lines if line.expired],
        "unvalued": [line for line in lines if line.view.plan.value is None],
        "old": [line for line in lines if line.old_stakes],
        "works": works[:30],
        "questions": disagreements(record, works),
        "shelf_days": SHELF_LIFE.days,
    }
    return render(request, "stakes/office/control.html", context)


@needs(Can.READ_RECORD)
def control_mark(request: HttpRequest, job: str, mark: uuid.UUID) -> HttpResponse:
    """Every value one control mark ever had, and what was set on the old ones."""
    found = _control(request.asked, mark)
    state = job_state(request.asked.record)
    line = next(
        x for x in control_lines(state, timezone.now()) if x.view.key == found.key
    )
    context = {"line": line, "view": line.view, "sign": row(line.view)["sign"]}
    return render(request, "stakes/office/control_mark.html", context)


@needs(Can.ADOPT)
def value_adopt(request: HttpRequest, job: str, mark: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    found = _control(asked, mark, also="foreign")
    sent = request.POST if request.method == "POST" else None
    form = AdoptForm(sent, record=asked.record, mark=found)
    place = "stakes:control-mark" if found.is_control else "stakes:mark"
    back = reverse(place, kwargs={"job": job, "mark": mark})

    def do() -> str:
        adopt_value(record=asked.record, mark=mark, by=asked.by, **form.said())
        return back

    known = len(values_of(asked.record, mark))
    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Adopted. The old value stays readable.",
        title=f"Adopt a value for {found.label}",
        lead=_lead(known, len(set_on_old_value(asked.record, mark))),
        verb="Adopt it",
        back=back,
    )


@needs(Can.ADOPT)
def doubt_answer(request: HttpRequest, job: str) -> HttpResponse:
    """The surveyor answers in writing why marks in question may be relied on."""
    asked: Asked = request.asked
    sent = request.POST if request.method == "POST" else None
    wanted = {"marks": request.GET.get("marks", "")[:500]}
    form = AnswerDoubtForm(sent, record=asked.record, initial=wanted)
    back = reverse("stakes:control", kwargs={"job": job})

    def do() -> str:
        answer_doubt(record=asked.record, by=asked.by, **form.cleaned_data)
        return back

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Answered. The doubt stays readable beside it.",
        title="Answer a doubt in writing",
        lead="A passing check is better. This is for what cannot be checked any more.",
        verb="Answer it",
        back=back,
    )


def _lead(known: int, stakes: int) -> str:
    if not known:
        return "The first value of this mark. Setups name the value they used."
    said = "Setups already made keep the value they used."
    if stakes:
        said += f" {stakes} stakes stand on older values and are listed with it."
    return f"It has {known} {'value' if known == 1 else 'values'} so far. {said}"


def _control(asked: Asked, mark: uuid.UUID, also: str = "") -> Mark:
    found = Mark.objects.filter(
        record=asked.record, key=mark, purpose__in=("control", "benchmark", also)
    ).first()
    if found is None:
        raise Http404
    return found
