"""The tray: what phones sent and could not be admitted, for the office to settle."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse

from jobs.api.admitting import admit_waiting
from jobs.api.tray import set_aside
from jobs.declared import Who, open_to
from jobs.forms.requests import ReasonForm
from jobs.models import TrayItem
from jobs.pages.answer import answer, do, sent
from stakes.record import Refused

SHOWN = 200


@open_to(Who.OFFICE)
def tray(request: HttpRequest) -> HttpResponse:
    waiting = TrayItem.objects.filter(settled_at=None).select_related("person")
    settled = TrayItem.objects.exclude(settled_at=None).order_by("-settled_at")
    context = {"waiting": waiting[:SHOWN], "settled": settled[:20]}
    return render(request, "jobs/tray.html", context)


@open_to(Who.OFFICE)
def tray_admit(request: HttpRequest, item: int) -> HttpResponse:
    """Let it into the record of the job it belongs to, as who said it."""
    one = get_object_or_404(TrayItem, pk=item, settled_at=None)

    def act() -> None:
        if request.method != "POST":
            raise Refused("Press the button to admit it.")
        job = request.POST.get("job", "").replace("\x00", "")[:40]
        admit_waiting(one, job=job, by=request.user)

    return do(request, act, to=reverse("jobs:tray"), said="It is in the record now.")


@open_to(Who.OFFICE)
def tray_aside(request: HttpRequest, item: int) -> HttpResponse:
    """Set it aside with a reason; it is kept."""
    one = get_object_or_404(TrayItem, pk=item, settled_at=None)
    form = ReasonForm(sent(request))
    return answer(
        request,
        form,
        lambda: set_aside(one, reason=form.cleaned_data["reason"], by=request.user),
        to=reverse("jobs:tray"),
        said="It is set aside, and kept.",
        title="Set it aside",
        lead=one.reason,
        verb="Set it aside",
    )
