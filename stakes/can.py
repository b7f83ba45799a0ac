"""What a page needs, and who asks. `stakes` declares it; `jobs` decides who has it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum
from typing import TypeVar

from stakes.models import Record
from stakes.record.by import By

View = TypeVar("View", bound=Callable[..., object])


class Can(StrEnum):
    """A right on one job. The table of who has which stands in `jobs.rights`."""

    READ = "read what is issued"
    READ_RECORD = "read the whole record"
    PLAN = "prepare plan, control and tolerances"
    ISSUE = "issue a plan"
    ADOPT = "adopt values for control"
    RECORD = "record field facts"
    PROCEED_HELD = "go past a gate with the stakes held"
    PASS_GATE = "accept what passed a gate"
    REPORT_LOSS = "report a lost stake"
    REQUEST = "ask for stakes"
    DECIDE = "decide requests"
    SCHEDULE = "plan visits"
    SEE_VISITS = "see visits"
    HAND_OVER = "hand stakes over"
    SIGN = "sign or decline a handover"
    SEE_HOLDS = "see holds"
    SEND_HOLD = "send and lift holds"
    ACKNOWLEDGE = "acknowledge a hold"
    SEE_PRICES = "see prices"
    ACCEPT_COST = "accept cost"
    EXPORT = "export the record"
    SEATS = "give seats"
    TERMS = "set terms"


@dataclass(frozen=True, slots=True)
class Asked:
    """Who asks for which job, as the door settled it; set on `request.asked`."""

    record: Record
    by: By
    rights: frozenset[Can]
    company: str = ""
    roles: frozenset[str] = frozenset()
    job_name: str = ""

    def can(self, *rights: Can) -> bool:
        return all(right in self.rights for right in rights)


def needs(*rights: Can) -> Callable[[View], View]:
    """Declare which rights a view under a job needs; the door refuses without them."""

    def declare(view: View) -> View:
        view.needs = frozenset(rights)  # type: ignore[attr-defined]
        return view

    return declare
