"""The one way a page with a form answers: shown, refused with reasons, or done."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django import forms
from django.contrib import messages
from django.http import (
    HttpRequest,
    HttpResponse,
    HttpResponseRedirect,
    QueryDict,
)
from django.shortcuts import render

from jobs.forms.refusals import show
from stakes.record import Refused


class SeeOther(HttpResponseRedirect):
    """Done: look at the page that shows it (303, so that it is fetched, not sent)."""

    status_code = 303


def sent(request: HttpRequest) -> QueryDict | None:
    """What was sent, for a form; an empty form that was sent is still one."""
    return request.POST if request.method == "POST" else None


def answer(
    request: HttpRequest,
    form: forms.BaseForm,
    act: Callable[[], object],
    *,
    to: str | Callable[[], str],
    said: str = "",
    template: str = "jobs/form.html",
    **context: Any,
) -> HttpResponse:
    """Show `form`; when it was sent and holds, do `act` and go on to `to`."""
    if request.method == "POST" and form.is_valid():
        try:
            act()
        except Refused as refused:
            show(form, refused)
        else:
            if said:
                messages.success(request, said)
            return SeeOther(to if isinstance(to, str) else to())
    status = 422 if form.is_bound else 200
    back = to if isinstance(to, str) else ""
    return render(
        request, template, {"form": form, "back": back, **context}, status=status
    )


def do(
    request: HttpRequest, act: Callable[[], object], *, to: str, said: str
) -> HttpResponse:
    """For a button without questions: do it, and say what came of it on the page."""
    try:
        act()
    except Refused as refused:
        messages.error(request, str(refused))
    else:
        messages.success(request, said)
    return SeeOther(to)
