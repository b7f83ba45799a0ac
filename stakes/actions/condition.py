"""Say what was found: undisturbed, lath down, leaning, gone, set by others."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from stakes.actions.once import Act, follows, once
from stakes.actions.told import kept_apart, short
from stakes.kinds.condition import (
    BuiltFrom,
    Condition,
    ForeignMarkFound,
    MarksGone,
    MarksSeen,
)
from stakes.kinds.words import Component
from stakes.models import Entry, EntryMark, Mark, Record
from stakes.queries.setups import setup_called
from stakes.record import By, Known, Refused, Said, append
from stakes.record.lengths import Measured

CAUSES = (
    "equipment passed",
    "excavation",
    "material stored on it",
    "traffic",
    "another trade's work",
    "weather or water",
    "frost",
    "animals",
    "removed by a person",
    "not known",
)
"""Neutral words for what happened; none of them names a fault."""

MOST_MARKS = 200


def see_marks(
    *,
    record: Record,
    marks: Sequence[uuid.UUID],
    condition: Condition,
    by: By,
    components: Component = "pe",
    cause: str = "",
    told_by: str = "",
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record how marks were seen. A sighting is no check."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        fact = MarksSeen(
            listed=_listed(record, marks),
            condition=condition,
            components=components,
            cause=short(cause, "cause"),
            told_by=short(told_by, "told_by"),
            occasion=occasion,
            photos=tuple(photos),
        )
        said = _said(fact, at, key, told_by, remark)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def report_gone(
    *,
    record: Record,
    marks: Sequence[uuid.UUID],
    by: By,
    witnessed: bool = False,
    cause: str = "",
    cause_by: str = "",
    disputed: bool = False,
    told_by: str = "",
    last_seen: datetime | None = None,
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    ask: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record that marks were destroyed before somebody's eyes, or found missing.

    `last_seen` is when somebody last saw them standing: it becomes a sighting of its
    own, so that the time of the loss is bounded from both sides.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        listed = _listed(record, marks)
        fact = MarksGone(
            listed=listed,
            witnessed=witnessed,
            cause=short(cause, "cause"),
            cause_by=short(cause_by, "cause_by"),
            disputed=disputed,
            told_by=short(told_by, "told_by"),
            occasion=occasion,
            ask=ask,
            photos=tuple(photos),
        )
        said = [_said(fact, at, key, told_by, remark)]
        if last_seen is not None:
            said.append(_last_seen(listed, last_seen, at, key, told_by, occasion))
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def find_foreign_mark(
    *,
    record: Record,
    label: str,
    by: By,
    words: str = "",
    set_by: str = "",
    northing: Measured | None = None,
    easting: Measured | None = None,
    elevation: Measured | None = None,
    setup: uuid.UUID | None = None,
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Record a mark set by others; returns its key. It is a basis for nothing."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    mark = follows(key, "mark")

    def do(act: Act) -> list[Entry]:
        _refuse_label(record, label)
        if setup is not None:
            setup_called(record, setup)
        if (northing is None) != (easting is None):
            raise Refused(
                "Only one of northing and easting was given.",
                do="Give both, or leave both empty.",
                field="easting" if easting is None else "northing",
            )
        fact = ForeignMarkFound(
            mark=mark,
            label=short(label, "label", 60),
            words=short(words, "words", 200),
            northing=northing,
            easting=easting,
            elevation=elevation,
            set_by=short(set_by, "set_by"),
            setup=setup,
            occasion=occasion,
            photos=tuple(photos),
        )
        known = Known.MEASURED if northing or elevation else Known.SEEN
        said = Said(fact=fact, at=at, known=known, key=key, private=kept_apart(remark))
        return append(record, said, by=by, act=act)

    once(record, key, asked, do)
    return mark


def note_built_from(
    *,
    record: Record,
    marks: Sequence[uuid.UUID],
    what: str,
    by: By,
    told_by: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record that work was built from stakes."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        if not what.strip():
            raise Refused("Say what was built.", field="what")
        fact = BuiltFrom(
            listed=_listed(record, marks),
            what=short(what, "what", 300),
            told_by=short(told_by, "told_by"),
        )
        return append(record, _said(fact, at, key, told_by, ""), by=by, act=act)

    return once(record, key, asked, do)[0]


def _said(
    fact: MarksSeen | MarksGone | BuiltFrom,
    at: datetime | None,
    key: uuid.UUID,
    told_by: str,
    remark: str,
) -> Said:
    return Said(
        fact=fact,
        at=at,
        known=Known.TOLD if told_by.strip() else Known.SEEN,
        key=key,
        private=kept_apart(remark),
    )


def _last_seen(
    listed: tuple[uuid.UUID, ...],
    seen: datetime,
    at: datetime | None,
    key: uuid.UUID,
    told_by: str,
    occasion: uuid.UUID | None,
) -> Said:
    if at is not None and seen > at:
        raise Refused(
            "They are said to be seen after they were found gone.",
            do="Give the time they were last seen standing.",
            field="last_seen",
        )
    fact = MarksSeen(
        listed=listed,
        condition="undisturbed",
        told_by=short(told_by, "told_by"),
        occasion=occasion,
    )
    return Said(
        fact=fact,
        at=seen,
        known=Known.TOLD if told_by.strip() else Known.SEEN,
        key=follows(key, "last seen"),
    )


def _listed(record: Record, marks: Sequence[uuid.UUID]) -> tuple[uuid.UUID, ...]:
    """The marks named, each once; Refused when none is, or one is not of this job."""
    listed = tuple(dict.fromkeys(marks))
    if not listed:
        raise Refused("No mark is named.", do="Tick at least one.", field="marks")
    if len(listed) > MOST_MARKS:
        raise Refused(
            f"{len(listed)} marks are named at once.",
            do=f"Say it of at most {MOST_MARKS}, then of the others.",
            field="marks",
        )
    here = EntryMark.objects.filter(record=record, mark__in=listed)
    known = set(here.values_list("mark", flat=True))
    if set(listed) - known:
        raise Refused(
            "A mark named here is not on this job.",
            do="Choose the marks from the list.",
            field="marks",
            code="no mark",
        )
    return listed


def _refuse_label(record: Record, label: str) -> None:
    if not label.strip():
        raise Refused(
            "The mark has no name.", do="Write what stands on it, or F1.", field="label"
        )
    if Mark.objects.filter(record=record, label__iexact=label.strip()).exists():
        raise Refused(
            f"There is a mark {label.strip()} already.",
            do="Give the one found another name.",
            field="label",
            code="taken",
        )
