"""People of a job: who has a seat, since when, and giving and ending seats."""

from __future__ import annotations

from uuid import UUID

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.utils import timezone

from jobs.actions.seats import end_seat, give_seat
from jobs.forms.jobs import WhyForm
from jobs.forms.seats import GiveSeatForm
from jobs.models import Seat
from jobs.pages.answer import answer, sent
from jobs.queries.companies import seats_seen
from jobs.queries.seats import office
from jobs.rights import Role
from stakes.can import Can, needs


@needs(Can.READ)
def seats(request: HttpRequest, job: str) -> HttpResponse:
    now = timezone.now()
    given = list(seats_seen(request.asked))
    ended = [seat for seat in given if seat.until is not None and seat.until <= now]
    context = {
        "standing": [seat for seat in given if seat not in ended],
        "ended": ended,
        "office": office(),
    }
    return render(request, "jobs/seats.html", context)


@needs(Can.SEATS)
def seat_give(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    form = GiveSeatForm(sent(request), zone=asked.record.time_zone)

    def act() -> None:
        said = dict(form.cleaned_data)
        said["roles"] = [Role(role) for role in said["roles"]]
        said["grants"] = [Can(right) for right in said["grants"]]
        give_seat(record=asked.record, by=asked.by, **said)

    return answer(
        request,
        form,
        act,
        to=reverse("jobs:seats", kwargs={"job": job}),
        said="The seat is given.",
        title="Give a seat",
        lead="Managers and surveyors of the firm have a seat on every job already.",
        verb="Give it",
    )


@needs(Can.SEATS)
def seat_end(request: HttpRequest, job: str, seat: UUID) -> HttpResponse:
    asked = request.asked
    one = get_object_or_404(Seat, record=asked.record, key=seat)
    form = WhyForm(sent(request))
    return answer(
        request,
        form,
        lambda: end_seat(
            record=asked.record, seat=one.key, by=asked.by, **form.cleaned_data
        ),
        to=reverse("jobs:seats", kwargs={"job": job}),
        said=f"The seat of {one.name} has ended.",
        title=f"End the seat of {one.name}",
        lead="From now on they see nothing of this job. What they did stays as it is.",
        verb="End it",
    )
