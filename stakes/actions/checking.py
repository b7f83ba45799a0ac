"""Check stakes: what was measured beside what the record computes, with its verdict."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from geometry.decide import Against
from stakes.actions.once import Act, follows, once
from stakes.actions.told import kept_apart, short
from stakes.kinds.checking import CheckSort, StakeChecked
from stakes.models import Entry, Record
from stakes.queries import measuring, setups
from stakes.queries.before_setting import mark_called
from stakes.queries.means import check_means, worth
from stakes.queries.stake_checks import NEEDS, Asked, Checked
from stakes.queries.state import JobState, MarkView
from stakes.queries.state_then import state_then
from stakes.queries.tolerance import ToleranceClass, class_of, classes_of
from stakes.record import By, Known, Refused, Said, append

__all__ = ["Asked", "check_stakes"]


def check_stakes(
    *,
    record: Record,
    sort: CheckSort,
    marks: Sequence[uuid.UUID],
    by: By,
    asked: Asked,
    setup: uuid.UUID | None = None,
    method: str = "",
    instrument: str = "",
    against: str = "",
    existing: bool = True,
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Check stakes and record the verdict; returns the check's key.

    `marks` are named in the order of NEEDS[sort]. Stakes among them are judged, control
    is what they are judged from; control alone is judged itself. `against` names the
    boundary (`existing` False) or existing work of a check of fit.
    """
    key = key or uuid.uuid4()
    said_with = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    check = follows(key, "check")

    def do(act: Act) -> list[Entry]:
        row = setups.setup_called(record, setup) if setup else None
        leans = [uuid.UUID(mark) for mark in row.bears_on] if row else []
        state = state_then(record, at, [*marks, *leans])
        views = _views(state, sort, marks)
        judged, others = _apart(sort, views)
        used = measuring.METHODS[row.sort] if row else method
        classes = classes_of(record, at)
        made = Checked(
            state, sort, views, asked, used, setup, _strictest(judged, sort, classes)
        )
        judgement = made.judge()
        component = "e" if sort == "elevation" else "p"
        means = check_means(
            state,
            check=check,
            setup=setup,
            control=[v.key for v in others if v.plan.is_control],
            method=used,
            instrument=instrument,
            person=by.person,
        )
        value = worth(
            state, judged, others, means, component, _against(made, against, existing)
        )
        fact = StakeChecked(
            check=check,
            sort=sort,
            listed=tuple(v.key for v in judged),
            other=tuple(v.key for v in others),
            setup=setup,
            set_by=_set_by(judged),
            components=component,  # type: ignore[arg-type]
            judgement=judgement,
            corrections=tuple(made.words),
            angle=short(asked.angle, "angle", 40),
            northing=asked.northing,
            easting=asked.easting,
            against=short(against, "against", 200),
            shared=value.shared,
            grade=value.grade,
            reaches=tuple(str(r) for r in value.reaches),  # type: ignore[arg-type]
            instrument=short(instrument or (row.serial if row else ""), "instrument"),
            occasion=occasion,
            photos=tuple(photos),
        )
        said = Said(
            fact=fact,
            at=at,
            known=Known.MEASURED,
            key=key,
            private=kept_apart(remark),
        )
        return append(record, said, by=by, act=act)

    once(record, key, said_with, do)
    return check


def _views(state: JobState, sort: str, marks: Sequence[uuid.UUID]) -> list[MarkView]:
    if sort not in NEEDS:
        raise Refused(f"{sort!r} is no sort of check.", field="sort")
    if len(marks) != len(NEEDS[sort]):
        raise Refused(
            f"A check of {sort} names {' and '.join(NEEDS[sort])}.",
            do="Choose each from the list.",
            field="marks",
        )
    if len(set(marks)) < len(marks):
        raise Refused(
            "One mark is named twice.", do="Choose different marks.", field="marks"
        )
    return [mark_called(state, mark) for mark in marks]


def _apart(
    sort: str, views: Sequence[MarkView]
) -> tuple[list[MarkView], list[MarkView]]:
    """The marks judged, and those they are judged from."""
    judged = [v for v in views if v.plan.purpose == "stake"]
    if not judged:
        judged = list(views[:1]) if sort != "distance" else list(views)
    others = [v for v in views if v not in judged]
    return judged, others


def _strictest(
    judged: Sequence[MarkView], sort: str, classes: dict[str, ToleranceClass]
) -> ToleranceClass:
    component = "e" if sort == "elevation" else "p"

    def size(limits: ToleranceClass) -> float:
        limit = limits.limit(component)
        return limit.metres if limit else float("inf")

    return min((class_of(v.plan, classes) for v in judged), key=size)


def _set_by(judged: Sequence[MarkView]) -> tuple[uuid.UUID, ...]:
    found = (v.stake.setup for v in judged if v.stake and v.stake.setup)
    return tuple(dict.fromkeys(found))


def _against(made: Checked, against: str, existing: bool) -> list[Against]:
    if made.sort == "fit":
        if not against.strip():
            raise Refused(
                "A check of fit says against what.",
                do="Name the boundary or the existing work, and the sheet.",
                field="against",
            )
        return [Against.EXISTING_WORK if existing else Against.BOUNDARY]
    if made.setup is None:
        return []
    return {
        "position": [Against.CONTROL],
        "elevation": [Against.BENCHMARK],
    }.get(made.sort, [])
