"""Planning the offsets of a building; the page redraws as its values change."""

from __future__ import annotations

import uuid
from typing import Any

from django.http import Http404, HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render
from django.urls import reverse

from stakes.actions.layout import classify_soil, draft_layout
from stakes.can import Asked, Can, needs
from stakes.drawings.plan import DrawnMark, DrawnZone, Plan, Ray, draw
from stakes.forms.office.layout import KeepForm, LayoutForm, SoilForm
from stakes.models import Mark, Record, Zone
from stakes.pages.answer import act, refuse_on
from stakes.queries.drawing import UNIT_NAMES, zones_of
from stakes.queries.layout import Laid, footprints, lay_out
from stakes.record import Refused


@needs(Can.READ_RECORD)
def layout(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    zones = footprints(record)
    form = _form(request.GET, record, zones)
    context: dict[str, Any] = {"form": form, "zones": zones}
    context |= _drawn(record, form) if zones else {}
    if "laid" in context:
        context["keep"] = KeepForm(record=record)
    part = bool(request.headers.get("HX-Request"))
    name = "stakes/office/_layout.html" if part else "stakes/office/layout.html"
    wrong = bool(zones) and bool(form.errors)
    return render(request, name, context, status=422 if wrong else 200)


@needs(Can.PLAN)
def layout_keep(request: HttpRequest, job: str) -> HttpResponse:
    """Keep the layout as it is shown: the same values are worked out once more."""
    asked: Asked = request.asked
    zones = footprints(asked.record)
    if request.method != "POST" or not zones:
        return HttpResponseRedirect(reverse("stakes:layout", args=[job]))
    form = _form(request.POST, asked.record, zones)
    keep = KeepForm(request.POST, record=asked.record)
    if form.is_valid() and keep.is_valid():
        try:
            draft = draft_layout(
                record=asked.record,
                asked=form.asked(),
                by=asked.by,
                **keep.cleaned_data,
            )
        except Refused as refused:
            refuse_on(form, refused)
        else:
            return HttpResponseRedirect(
                reverse("stakes:draft", kwargs={"job": job, "draft": draft.key})
            )
    context = {"form": form, "zones": zones, "keep": keep}
    context |= _drawn(asked.record, form)
    return render(request, "stakes/office/layout.html", context, status=422)


@needs(Can.RECORD, Can.READ_RECORD)
def soil_classify(request: HttpRequest, job: str, zone: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    row = Zone.objects.filter(record=asked.record, key=zone, sort="footprint").first()
    if row is None:
        raise Http404
    form = SoilForm(request.POST if request.method == "POST" else None)
    back = f"{reverse('stakes:layout', kwargs={'job': job})}?footprint={zone}"

    def do() -> str:
        classify_soil(
            record=asked.record, footprint=zone, by=asked.by, **form.cleaned_data
        )
        return back

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Recorded. The limit is drawn for it.",
        title=f"Soil under {row.name}",
        lead="As the competent person on site classified it. Until then the limit is "
        "drawn at 1 1/2:1 and marked assumed.",
        verb="Record it",
        back=back,
    )


def _form(sent: Any, record: Record, zones: list[Zone]) -> LayoutForm:
    """A plain address shows the usual values; a sent form has all of its own."""
    data = {k: str(v) for k, v in sent.items()}
    if "offset" not in data:
        data["one_value"] = "on"
    return LayoutForm(
        data, record=record, zones=zones, first_number=next_number(record)
    )


def next_number(record: Record) -> int:
    """The next round hundred and one that no number of the job has reached."""
    labels = Mark.objects.filter(record=record).values_list("label", flat=True)
    used = [int(x) for x in labels if x.isascii() and x.isdecimal() and len(x) < 7]
    return (max(used) // 100 + 1) * 100 + 1 if used else 101


def _drawn(record: Record, form: LayoutForm) -> dict[str, Any]:
    if not form.is_valid():
        return {}
    try:
        laid = lay_out(record, form.asked())
    except Refused as refused:
        refuse_on(form, refused)
        return {}
    return {
        "laid": laid,
        "rows": [(laid.label(stake), stake) for stake in laid.chosen.stakes],
        "drawing": draw(_plan(record, laid)),
        "values": [(k, v) for k, v in form.data.items() if k in form.fields],
        "is_shown": laid.asked.depth.metres > 0,
    }


def _plan(record: Record, laid: Laid) -> Plan:
    """The layout on its site: zones, the limit for stakes, lines held, new stakes."""
    dig = laid.plan.excavation
    zones = [z for z in zones_of(record) if z.sort != "excavation"]
    if laid.asked.depth.metres > 0:
        zones.append(
            DrawnZone(
                corners_m=[(float(e), float(n)) for e, n in dig.limit],
                sort="excavation",
                name="limit for stakes",
                words=f"{dig.ratio:g}:1{', assumed' if dig.assumed else ''}",
            )
        )
    by_id = {line.id: line for line in laid.plan.lines}
    ends = {(end.line_id, end.end): end.wall for end in laid.plan.ends}
    rays = [
        Ray(((s.e_m, s.n_m), wall))
        for s in laid.chosen.stakes
        if s.line_id in by_id and (wall := ends.get((s.line_id, s.end))) is not None
    ]
    marks = [
        DrawnMark(
            e_m=s.e_m,
            n_m=s.n_m,
            label=laid.label(s),
            purpose="stake",
            standing="planned",
            trust="not checked",
            carries="position",
        )
        for s in laid.chosen.stakes
    ]
    return Plan(
        marks=marks,
        zones=zones,
        rays=rays,
        unit_m=float(record.length_unit.metres_per_unit),
        unit=UNIT_NAMES[record.unit],
        title=f"Offset plan of {laid.zone.name}",
    )
