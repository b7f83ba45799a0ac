"""The surveyor answers a doubt in writing: why it may be relied on all the same."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from stakes.actions.once import Act, once
from stakes.actions.sheets import marks_here
from stakes.actions.told import short
from stakes.kinds.control import TrustAnswered
from stakes.kinds.words import Component
from stakes.models import Entry, Record, Setup
from stakes.record import By, Known, Refused, Said, append


def answer_doubt(
    *,
    record: Record,
    reason: str,
    by: By,
    marks: Sequence[uuid.UUID] = (),
    setup: uuid.UUID | None = None,
    components: Component = "pe",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Answer the doubt about marks, or about a setup and all that was set from it.

    The doubt stays readable; what may be trusted is again what the checks say.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        if not reason.strip():
            raise Refused(
                "The reason is not written.",
                do="Say why it may be relied on; it stands with your name.",
                field="reason",
            )
        if not marks and setup is None:
            raise Refused(
                "It is not said which doubt is answered.",
                do="Name the marks, or the setup.",
                field="marks",
            )
        here = Setup.objects.filter(record=record, key=setup)
        if setup is not None and not here.exists():
            raise Refused("There is no such setup on this job.", field="setup")
        fact = TrustAnswered(
            listed=marks_here(record, marks),
            setup=setup,
            components=components,
            reason=short(reason, "reason", 500),
        )
        said = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]
