"""Accept what passed a gate: the surveyor's word, with a reason."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from stakes.actions.once import Act, once
from stakes.actions.told import short
from stakes.kinds.setting import GateAccepted
from stakes.models import Entry, Record
from stakes.queries.state import job_state
from stakes.record import By, Known, Refused, Said, append


def accept_gate(
    *,
    record: Record,
    marks: Sequence[uuid.UUID],
    reason: str,
    by: By,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Accept stakes that are held because something was missing when they were set."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        listed = tuple(dict.fromkeys(marks))
        if not listed:
            raise Refused("No stake is named.", do="Tick at least one.", field="marks")
        if not reason.strip():
            raise Refused(
                "An acceptance says why.",
                do="Write what makes these stakes good to use all the same.",
                field="reason",
            )
        state = job_state(record, at=at)
        for mark in listed:
            view = state.marks.get(mark)
            if view is None or view.stake is None or not view.stake.held:
                name = view.label if view else "A mark named here"
                raise Refused(
                    f"{name} is not held by a gate.",
                    do="Look at the list again: it may be accepted or checked by now.",
                    field="marks",
                    code="not held",
                )
        fact = GateAccepted(listed=listed, reason=short(reason, "reason", 500))
        said = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]
