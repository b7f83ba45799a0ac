"""What the home page of a job says about requests, visits, handovers and holds."""

from __future__ import annotations

from typing import Any

from django.utils import timezone

from jobs.actions.requests import OPEN
from jobs.cards import card
from jobs.models import Handover, Hold
from jobs.queries.companies import companies_seen
from jobs.queries.proposals import proposal, with_doubts
from jobs.queries.requests import requests_seen
from jobs.queries.visits import visits_seen
from stakes.can import Asked, Can


@card("jobs/_card_holds.html", Can.SEE_HOLDS)
def holds_card(asked: Asked) -> dict[str, Any] | None:
    """Holds in force, and for whoever can send one, what should be on hold."""
    in_force = list(Hold.objects.filter(record=asked.record, lifted_at=None))
    companies = companies_seen(asked)
    if companies is not None:
        in_force = [hold for hold in in_force if companies & set(hold.companies)]
    doubts = None
    if asked.can(Can.SEND_HOLD) and with_doubts([asked.record]):
        doubts = proposal(asked.record)
    if not in_force and doubts is None:
        return None
    held = {mark for hold in in_force for mark in hold.in_force}
    return {"marks": len(held), "doubts": len(doubts.all) if doubts else 0}


@card("jobs/_card_requests.html", Can.READ)
def requests_card(asked: Asked) -> dict[str, Any]:
    found = list(requests_seen(asked).filter(state__in=OPEN))
    return {
        "open": len(found),
        "waiting": [r for r in found if r.state == "received"],
        "built": any(r.built_from for r in found),
    }


@card("jobs/_card_visits.html", Can.SEE_VISITS)
def visits_card(asked: Asked) -> dict[str, Any]:
    coming = visits_seen(asked).filter(left_at=None, cancelled="")
    return {"next": coming.order_by("starts_at").first(), "now": timezone.now()}


@card("jobs/_card_handovers.html", Can.READ)
def handovers_card(asked: Asked) -> dict[str, Any] | None:
    """For who gave them as for who should answer; others have nothing to do there."""
    if not (asked.can(Can.SIGN) or asked.can(Can.HAND_OVER)):
        return None
    found = Handover.objects.filter(record=asked.record, answer="")
    companies = companies_seen(asked)
    if companies is not None:
        found = found.filter(company__in=companies)
    return {"unanswered": len(found)} if found else None
