"""The tray: what phones sent and could not be admitted, for the office to settle."""

from __future__ import annotations

from datetime import timedelta

import msgspec
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.utils import timezone

from jobs.api.phone import PhoneItem, admit
from jobs.declared import Who, open_to
from jobs.forms.requests import ReasonForm
from jobs.models import TrayItem
from jobs.pages.answer import answer, do, sent
from stakes.record import Refused


@open_to(Who.OFFICE)
def tray(request: HttpRequest) -> HttpResponse:
    waiting = TrayItem.objects.filter(settled_at=None).select_related("person")
    return render(request, "jobs/tray.html", {"waiting": waiting})


@open_to(Who.OFFICE)
def tray_admit(request: HttpRequest, item: int) -> HttpResponse:
    """Try again: a seat may have been given meanwhile for the time it happened."""
    one = get_object_or_404(TrayItem, pk=item, settled_at=None)

    def act() -> None:
        if request.method != "POST":
            raise Refused("Press the button to admit it.")
        try:
            said = msgspec.convert(one.sent, PhoneItem)
        except msgspec.ValidationError as error:
            raise Refused(f"It cannot be read: {error}.", do="Set it aside.") from error
        told = admit(one.person, "", timedelta(0), said)
        _settle(one, request, f"entry {told['number']}")

    return do(request, act, to=reverse("jobs:tray"), said="It is in the record now.")


@open_to(Who.OFFICE)
def tray_aside(request: HttpRequest, item: int) -> HttpResponse:
    """Set it aside with a reason; it is kept."""
    one = get_object_or_404(TrayItem, pk=item, settled_at=None)
    form = ReasonForm(sent(request))
    return answer(
        request,
        form,
        lambda: _settle(one, request, form.cleaned_data["reason"]),
        to=reverse("jobs:tray"),
        said="It is set aside, and kept.",
        title="Set it aside",
        lead=one.reason,
        verb="Set it aside",
    )


def _settle(one: TrayItem, request: HttpRequest, outcome: str) -> None:
    TrayItem.objects.filter(pk=one.pk, settled_at=None).update(
        settled_at=timezone.now(), settled_by=request.user.name, outcome=outcome
    )
