"""How a page answers: a form with the refusal beside its field, or the next page."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django import forms
from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render

from stakes.can import Asked
from stakes.record import Refused


class AskedRequest(HttpRequest):
    """A request after the door: who asks for which job."""

    asked: Asked


def refuse_on(form: forms.Form, refused: Refused) -> None:
    """Put a refusal where the person looks: by its field, or above the form."""
    field = refused.field if refused.field in form.fields else None
    form.add_error(field, str(refused))


def act(
    request: HttpRequest,
    form: forms.Form,
    template: str,
    do: Callable[[], str],
    *,
    done: str = "",
    **context: Any,
) -> HttpResponse:
    """Show a form; when it is sent and sound, `do` it and go to the address it returns.

    A refusal shows the same form with everything typed kept, status 422.
    """
    status = 200
    if request.method == "POST":
        if form.is_valid():
            try:
                target = do()
            except Refused as refused:
                refuse_on(form, refused)
            else:
                if done:
                    messages.success(request, done)
                return HttpResponseRedirect(target)
        status = 422
    return render(request, template, {"form": form, **context}, status=status)
