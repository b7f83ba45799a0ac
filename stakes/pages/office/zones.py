"""Zones and lines of a job: listed, drawn, drawn again, taken off."""

from __future__ import annotations

import uuid
from typing import Any

from django.contrib import messages
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render
from django.urls import reverse

from geometry.units import Length
from stakes.actions.zones import draw_zone, remove_zone
from stakes.can import Asked, Can, needs
from stakes.drawings.plan import draw
from stakes.forms.office.zones import ZoneForm
from stakes.kinds.planning import ZoneDrawn
from stakes.models import Zone
from stakes.pages.answer import act
from stakes.queries.drawing import plan_of
from stakes.queries.state import job_state
from stakes.record import Refused, reading


@needs(Can.READ_RECORD)
def zones(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    rows = list(Zone.objects.filter(record=record).order_by("sort", "name"))
    drawing = draw(plan_of(job_state(record), f"Zones of job {record.number}"))
    context = {"zones": rows, "drawing": drawing if rows else ""}
    return render(request, "stakes/office/zones.html", context)


@needs(Can.PLAN)
def zone_add(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    form = ZoneForm(
        request.POST if request.method == "POST" else None, record=asked.record
    )
    return _form(request, form, None, "Draw a zone or line")


@needs(Can.PLAN)
def zone_change(request: HttpRequest, job: str, zone: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    row = _found(asked, zone)
    form = ZoneForm(
        request.POST if request.method == "POST" else None,
        record=asked.record,
        initial=_as_drawn(asked, row),
    )
    return _form(request, form, zone, f"Draw {row.name} again")


@needs(Can.PLAN)
def zone_remove(request: HttpRequest, job: str, zone: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    row = _found(asked, zone)
    if request.method == "POST":
        try:
            remove_zone(record=asked.record, zone=zone, by=asked.by)
        except Refused as refused:
            messages.error(request, str(refused))
        else:
            messages.success(request, f"{row.name} is taken off the plan.")
    return HttpResponseRedirect(reverse("stakes:zones", kwargs={"job": job}))


def _form(
    request: HttpRequest, form: ZoneForm, zone: uuid.UUID | None, title: str
) -> HttpResponse:
    asked: Asked = request.asked
    back = reverse("stakes:zones", kwargs={"job": asked.record.number})

    def do() -> str:
        draw_zone(
            record=asked.record, zone=zone, by=asked.by, **form.said(asked.record)
        )
        return back

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Drawn.",
        title=title,
        lead="Coordinates as printed on the sheet, in the unit of the job.",
        verb="Draw it",
        back=back,
    )


def _as_drawn(asked: Asked, row: Zone) -> dict[str, Any]:
    """The form as the zone was last drawn, its corners as they were entered."""
    said = reading.entries(
        asked.record, thing="zone", key=row.key, kinds=[ZoneDrawn.KIND]
    )
    fact = said[-1].fact
    assert isinstance(fact, ZoneDrawn)
    unit = asked.record.length_unit

    def text(length: Length) -> str:
        return length.text if length.unit is unit else length.shown(unit, 4)

    corners = [
        f"{text(c.northing.length)}, {text(c.easting.length)}" for c in fact.corners
    ]
    return {
        "sort": fact.sort,
        "name": fact.name,
        "words": fact.words,
        "corners": "\n".join(corners),
        "height": fact.height.text if fact.height else "",
        "basis": [str(b) for b in fact.basis],
    }


def _found(asked: Asked, key: uuid.UUID) -> Zone:
    row = Zone.objects.filter(record=asked.record, key=key).first()
    if row is None:
        raise Http404
    return row
