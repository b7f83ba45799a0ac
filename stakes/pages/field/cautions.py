"""Locate tickets, hazards of the site, and stakes that are held."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.utils import timezone

from stakes.actions.cautions import flag_hazard, lift_hazard, record_locate
from stakes.actions.gates import accept_gate
from stakes.can import Can, needs
from stakes.forms.field.cautions import (
    AcceptForm,
    HazardForm,
    HazardGoneForm,
    LocateForm,
)
from stakes.models import EntryMatter
from stakes.pages.field.answering import answered
from stakes.pages.field.signs import row
from stakes.pages.field.where import page, sent, state_of, to, visit_of
from stakes.queries import locates, setups
from stakes.queries.drawing import in_order


@needs(Can.RECORD)
def tickets(request: HttpRequest, job: str) -> HttpResponse:
    now = timezone.now()
    listed = locates.tickets(request.asked.record)
    return page(
        request,
        "tickets.html",
        tickets=[(ticket, ticket.lacks(now)) for ticket in listed],
    )


@needs(Can.RECORD)
def ticket_record(
    request: HttpRequest, job: str, locate: UUID | None = None
) -> HttpResponse:
    listed = {t.fact.ticket: t for t in locates.tickets(request.asked.record)}
    if locate is not None and locate not in listed:
        raise Http404("There is no such ticket on this job.")
    form = LocateForm(
        sent(request),
        state=state_of(request),
        visit=visit_of(request),
        ticket=listed.get(locate) if locate else None,
    )

    def do(_photos: tuple[str, ...]) -> str:
        record_locate(**form.said(), **form.facts(), ticket=locate, by=request.asked.by)
        return to(request, "tickets")

    return answered(
        request,
        form,
        "ticket_record.html",
        do,
        done="Locate ticket recorded.",
        back=to(request, "tickets"),
    )


@needs(Can.RECORD)
def hazards(request: HttpRequest, job: str) -> HttpResponse:
    form = HazardForm(sent(request), state=state_of(request), visit=visit_of(request))

    def do(_photos: tuple[str, ...]) -> str:
        said = form.said()
        said.pop("occasion")
        flag_hazard(
            **said,
            sort=form.cleaned_data["sort"],
            words=form.cleaned_data["words"],
            by=request.asked.by,
        )
        return to(request, "hazards")

    return answered(
        request,
        form,
        "hazards.html",
        do,
        done="Hazard flagged. Crews are told before they set a stake.",
        back=to(request, "home"),
        hazards=locates.hazards(request.asked.record),
    )


@needs(Can.RECORD)
def hazard_gone(request: HttpRequest, job: str, hazard: UUID) -> HttpResponse:
    record = request.asked.record
    flagged = {h.hazard: h for h in locates.hazards(record)}
    known = EntryMatter.objects.filter(record=record, thing="hazard", key=hazard)
    if not known.exists():
        raise Http404("There is no such hazard on this job.")
    form = HazardGoneForm(
        sent(request), state=state_of(request), visit=visit_of(request)
    )

    def do(_photos: tuple[str, ...]) -> str:
        said = form.said()
        said.pop("occasion")
        lift_hazard(
            **said,
            hazard=hazard,
            words=form.cleaned_data["words"],
            by=request.asked.by,
        )
        return to(request, "hazards")

    return answered(
        request,
        form,
        "hazard_gone.html",
        do,
        done="Recorded: no longer there.",
        back=to(request, "hazards"),
        hazard=flagged.get(hazard),
    )


@needs(Can.PASS_GATE)
def held(request: HttpRequest, job: str) -> HttpResponse:
    """Stakes that passed a gate, each with what it passed; the surveyor decides."""
    state = state_of(request)
    views = [v for v in state.marks.values() if v.stake is not None and v.stake.held]
    form = AcceptForm(sent(request), state=state, visit=visit_of(request), initial={})

    def do(_photos: tuple[str, ...]) -> str:
        said = form.said()
        said.pop("occasion")
        accept_gate(
            **said,
            marks=[UUID(m) for m in form.cleaned_data["mark"]],
            reason=form.cleaned_data["reason"],
            by=request.asked.by,
        )
        return to(request, "held")

    return answered(
        request,
        form,
        "held.html",
        do,
        done="Accepted.",
        back=to(request, "home"),
        rows=[(row(v), setups.set_fact(state, v)) for v in in_order(views)],
        ticked=request.POST.getlist("mark"),
    )
