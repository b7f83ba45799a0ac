"""Questions to the designer and verbal directions: both hold their marks until
answered or settled. A missing building-to-site dimension is asked for, never supplied.
"""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from stakes.actions.once import Act, follows, once
from stakes.actions.sheets import marks_here
from stakes.actions.told import short
from stakes.kinds.sheets import (
    DirectionGiven,
    DirectionSettled,
    QuestionAnswered,
    QuestionAsked,
)
from stakes.models import Direction, Entry, Question, Record, Sheet
from stakes.record import By, Known, Refused, Said, append

LONGEST = 1000


def ask_question(
    *,
    record: Record,
    words: str,
    to_whom: str,
    by: By,
    holds: Sequence[uuid.UUID] = (),
    sheets: Sequence[uuid.UUID] = (),
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Put a question to the designer; it holds its marks. Returns its key."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    question = follows(key, "question")

    def do(act: Act) -> list[Entry]:
        _said(words, "words", "The question is not written.")
        _said(to_whom, "to_whom", "It is not said whom the question goes to.")
        fact = QuestionAsked(
            question=question,
            words=short(words, "words", LONGEST),
            to_whom=short(to_whom, "to_whom"),
            holds=marks_here(record, holds),
            sheets=_sheets(record, sheets),
        )
        return append(record, Said(fact=fact, at=at, key=key), by=by, act=act)

    once(record, key, asked, do)
    return question


def answer_question(
    *,
    record: Record,
    question: uuid.UUID,
    words: str,
    by_whom: str,
    by: By,
    in_writing: bool = False,
    sheet: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record the designer's answer; the marks the question held are free again."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        row = Question.objects.filter(record=record, key=question).first()
        if row is None:
            raise Refused("There is no such question on this job.", code="no question")
        if row.answered_at is not None:
            raise Refused(
                f"This question was answered by {row.answered_by} already.",
                do="To change the answer, correct its entry; a new doubt is a new "
                "question.",
                code="answered",
            )
        _said(words, "words", "The answer is not written.")
        _said(by_whom, "by_whom", "It is not said who answered.")
        fact = QuestionAnswered(
            question=question,
            words=short(words, "words", LONGEST),
            by_whom=short(by_whom, "by_whom"),
            in_writing=in_writing,
            sheet=_sheets(record, [sheet])[0] if sheet else None,
        )
        said = Said(fact=fact, at=at, known=_known(in_writing), key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def give_direction(
    *,
    record: Record,
    words: str,
    by_whom: str,
    to_whom: str,
    by: By,
    holds: Sequence[uuid.UUID] = (),
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Record a change by word of mouth: who, to whom, the words. Returns its key."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    direction = follows(key, "direction")

    def do(act: Act) -> list[Entry]:
        _said(words, "words", "The direction is not written.")
        _said(by_whom, "by_whom", "It is not said who gave the direction.")
        _said(to_whom, "to_whom", "It is not said to whom it was given.")
        fact = DirectionGiven(
            direction=direction,
            words=short(words, "words", LONGEST),
            by_whom=short(by_whom, "by_whom"),
            to_whom=short(to_whom, "to_whom"),
            holds=marks_here(record, holds),
        )
        said = Said(fact=fact, at=at, known=Known.TOLD, key=key)
        return append(record, said, by=by, act=act)

    once(record, key, asked, do)
    return direction


def settle_direction(
    *,
    record: Record,
    direction: uuid.UUID,
    confirmed: bool,
    by: By,
    words: str = "",
    sheet: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """A verbal direction was confirmed in writing, or is not followed."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        row = Direction.objects.filter(record=record, key=direction).first()
        if row is None:
            raise Refused(
                "There is no such direction on this job.", code="no direction"
            )
        if row.settled_at is not None:
            raise Refused(
                "This direction was settled already.",
                do="To change that, correct its entry.",
                code="settled",
            )
        if not sheet:
            _said(
                words,
                "words",
                "It is not said which writing confirms it, or why it is not followed.",
            )
        fact = DirectionSettled(
            direction=direction,
            confirmed=confirmed,
            words=short(words, "words", LONGEST),
            sheet=_sheets(record, [sheet])[0] if sheet else None,
        )
        said = Said(fact=fact, at=at, known=_known(confirmed), key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def _known(in_writing: bool) -> Known:
    return Known.PAPER if in_writing else Known.TOLD


def _said(text: str, field: str, what: str) -> None:
    if not text.strip():
        raise Refused(what, do="Write it down as it was said.", field=field)


def _sheets(record: Record, sheets: Sequence[uuid.UUID]) -> tuple[uuid.UUID, ...]:
    listed = tuple(dict.fromkeys(sheets))
    if Sheet.objects.filter(record=record, key__in=listed).count() != len(listed):
        raise Refused("A sheet named here is not on this job.", code="no sheet")
    return listed
