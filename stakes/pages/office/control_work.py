"""Recovering control, a traverse, levels: entered, compared, kept as questions."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.urls import reverse

from stakes.actions.control_work import Worked
from stakes.actions.levelling import run_levels
from stakes.actions.recovering import recover_control
from stakes.actions.traversing import run_traverse
from stakes.can import Asked, Can, needs
from stakes.forms.office.control_work import LevelsForm, RecoverForm, TraverseForm
from stakes.pages.answer import act


@needs(Can.RECORD, Can.READ_RECORD)
def recover(request: HttpRequest, job: str) -> HttpResponse:
    return _page(
        request,
        RecoverForm,
        recover_control,
        title="Recover control",
        template="stakes/office/recover.html",
        lead="How each mark was found, then every distance between what is found and "
        "the levels between two benchmarks. The record compares when it is sent.",
    )


@needs(Can.RECORD, Can.READ_RECORD)
def traverse(request: HttpRequest, job: str) -> HttpResponse:
    return _page(
        request,
        TraverseForm,
        run_traverse,
        title="Traverse",
        lead="Angles are balanced first when they close, then the compass rule. New "
        "marks wait as a draft when it closes in its class.",
    )


@needs(Can.RECORD, Can.READ_RECORD)
def levels(request: HttpRequest, job: str) -> HttpResponse:
    return _page(
        request,
        LevelsForm,
        run_levels,
        title="Levels",
        lead="From one benchmark to another. A loop on a single benchmark proves the "
        "levels and not the benchmark.",
    )


def _page(
    request: HttpRequest,
    form_class: type,
    do: Callable[..., Worked],
    *,
    title: str,
    lead: str,
    template: str = "stakes/office/form.html",
) -> HttpResponse:
    asked: Asked = request.asked
    form = form_class(
        request.POST if request.method == "POST" else None, record=asked.record
    )
    back = reverse("stakes:control", kwargs={"job": asked.record.number})

    def send() -> str:
        work = do(record=asked.record, by=asked.by, **form.said())
        return _told(request, asked, work, back)

    return act(
        request,
        form,
        template,
        send,
        title=title,
        lead=lead,
        verb="Record it",
        back=back,
    )


def _told(request: HttpRequest, asked: Asked, work: Worked, back: str) -> str:
    """Say what it came to; new marks lead to their draft."""
    failed: Any = any(c.verdict == "fail" for c in work.fact.compared)
    say = (
        messages.warning if failed or "fail" in work.fact.closure else messages.success
    )
    say(request, f"Recorded. {work.fact.closure}")
    if work.draft is not None and asked.can(Can.PLAN):
        return reverse(
            "stakes:draft", kwargs={"job": asked.record.number, "draft": work.draft.key}
        )
    return back
