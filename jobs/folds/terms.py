"""The row of one setting of the terms."""

from __future__ import annotations

from jobs.kinds.terms import RestakeTermsSet
from jobs.kinds.terms import Term as TermSet
from jobs.models import Term
from stakes.record import Counted
from stakes.record.folds import Columns, fold_of
from stakes.record.kinds import facts_as_data


@fold_of("term", model=Term)
def term(happened: list[Counted]) -> Columns | None:
    """A setting said again under its own key stands in the place of the first."""
    settings = [said for said in happened if isinstance(said.fact, TermSet)]
    if not settings:
        return None
    said = settings[-1]
    fact = said.fact
    assert isinstance(fact, TermSet)
    return {
        "subject": fact.SUBJECT,
        "company": fact.company if isinstance(fact, RestakeTermsSet) else "",
        "effective": fact.effective,
        "set_at": said.happened_at,
        "set_by": said.name,
        "number": said.number,
        "place": said.entry.place,
        "facts": facts_as_data(fact),
    }
