"""Retire marks whose stage is done; supersede those the design has left behind."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from stakes.actions.once import Act, once
from stakes.actions.told import short
from stakes.kinds.planning import MarksRetired, MarksSuperseded
from stakes.models import Entry, Mark, Record, Sheet
from stakes.record import By, Known, Refused, Said, append

MOST_MARKS = 1000


def retire_marks(
    *,
    record: Record,
    by: By,
    marks: Sequence[uuid.UUID] = (),
    stage: str = "",
    reason: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Retire the marks named, or all marks of a stage that are not retired yet.

    Doubt about what was given from them stays: retiring answers nothing.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        facts = [
            MarksRetired(
                listed=part,
                stage=short(stage, "stage", 40),
                reason=short(reason, "reason"),
            )
            for part in _parts(_listed(record, marks, stage))
        ]
        said = [
            Said(
                fact=fact,
                at=at,
                known=Known.DECIDED,
                key=key if n == 0 else uuid.uuid5(key, f"part {n}"),
            )
            for n, fact in enumerate(facts)
        ]
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def supersede_marks(
    *,
    record: Record,
    marks: Sequence[uuid.UUID],
    reason: str,
    by: By,
    sheet: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Say that stakes which still stand no longer mark the current design.

    Marks issued again in another place supersede their stakes by that already; this is
    for those a sheet takes away, or whose new place is not known yet.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        if not marks:
            raise Refused("No mark is named.", do="Name the marks.", field="marks")
        if not reason.strip():
            raise Refused(
                "The reason is missing.", do="Say what changed.", field="reason"
            )
        if sheet is not None and not Sheet.objects.filter(record=record, key=sheet):
            raise Refused("There is no such sheet on this job.", field="sheet")
        fact = MarksSuperseded(
            listed=tuple(_listed(record, marks, "")),
            sheet=sheet,
            reason=short(reason, "reason"),
        )
        said = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def _listed(record: Record, marks: Sequence[uuid.UUID], stage: str) -> list[uuid.UUID]:
    rows = Mark.objects.filter(record=record).exclude(standing="retired")
    if marks:
        found = set(rows.filter(key__in=list(marks)).values_list("key", flat=True))
        if missing := [m for m in marks if m not in found]:
            raise Refused(
                f"{len(missing)} of these marks are not on this job, or are retired.",
                do="Choose them again from the list.",
                field="marks",
                code="no mark",
            )
        return list(dict.fromkeys(marks))
    if not stage.strip():
        raise Refused(
            "It is not said what is retired.", do="Choose a stage.", field="stage"
        )
    found_all = list(
        rows.filter(stage=stage.strip()).order_by("label").values_list("key", flat=True)
    )
    if not found_all:
        raise Refused(
            f"No mark of stage {stage[:40]!r} is left to retire.",
            do="Choose another stage.",
            field="stage",
            code="no mark",
        )
    return found_all


def _parts(listed: list[uuid.UUID]) -> list[tuple[uuid.UUID, ...]]:
    return [
        tuple(listed[i : i + MOST_MARKS]) for i in range(0, len(listed), MOST_MARKS)
    ]
