"""What the home page of a job says about its people and terms."""

from __future__ import annotations

from typing import Any

from django.utils import timezone

from jobs.cards import card
from jobs.queries.companies import companies_seen, seats_seen
from jobs.queries.seats import in_force
from jobs.queries.terms import terms_at, today
from stakes.can import Asked, Can


@card("jobs/_card_people.html", Can.READ)
def people_card(asked: Asked) -> dict[str, Any]:
    seats = list(seats_seen(asked).filter(in_force(timezone.now())))
    companies = sorted({seat.company_name for seat in seats})
    return {"seats": len(seats), "companies": companies}


@card("jobs/_card_terms.html", Can.READ)
def terms_card(asked: Asked) -> dict[str, Any]:
    own = "" if companies_seen(asked) is None else asked.company
    terms = terms_at(asked.record, today(asked.record), company=own)
    unconfirmed = sum(c.default for c in terms.classes)
    return {"terms": terms, "unconfirmed": unconfirmed}
