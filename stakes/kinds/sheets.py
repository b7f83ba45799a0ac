"""Facts of the drawings: sheets received and read, questions, verbal directions."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal
from uuid import UUID

from stakes.record.kinds import Fact, MarkLink, MatterLink, kind

Status = Literal["preliminary", "for construction", "superseded", "information"]


@kind("sheet received")
class SheetReceived(Fact, kw_only=True):
    """A drawing, file, sketch or written answer came in: number, revision, status."""

    sheet: UUID
    number: str
    revision: str
    status: Status
    title: str = ""
    from_whom: str = ""
    received_on: str = ""
    replaces: UUID | None = None
    file_sha256: str = ""
    what_changed: str = ""
    touched: tuple[UUID, ...] = ()
    touches_all: bool = False

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "touched by sheet") for m in self.touched]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("sheet", self.sheet)
        if self.replaces:
            yield MatterLink("sheet", self.replaces)

    def sentence(self) -> str:
        return f"Sheet {self.number} revision {self.revision} received, {self.status}."


@kind("sheet read")
class SheetRead(Fact, kw_only=True):
    """Somebody read a sheet; what it changes is sorted to marks, or it changes none."""

    sheet: UUID
    sorted_to: tuple[UUID, ...] = ()
    changes_nothing: bool = False
    remark: str = ""

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "touched by sheet") for m in self.sorted_to]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("sheet", self.sheet)

    def sentence(self) -> str:
        return "Sheet read."


@kind("question asked")
class QuestionAsked(Fact, kw_only=True):
    """A conflict or a missing dimension was put to the designer; it holds its marks."""

    question: UUID
    words: str
    to_whom: str
    holds: tuple[UUID, ...] = ()
    sheets: tuple[UUID, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "held by a question") for m in self.holds]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("question", self.question)
        yield from (MatterLink("sheet", s) for s in self.sheets)

    def sentence(self) -> str:
        return f"Question to {self.to_whom}: {self.words}"


@kind("question answered")
class QuestionAnswered(Fact, kw_only=True):
    """The designer answered, in writing or not; the marks it held are free again."""

    question: UUID
    words: str
    by_whom: str
    in_writing: bool = False
    sheet: UUID | None = None

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("question", self.question)
        if self.sheet:
            yield MatterLink("sheet", self.sheet)

    def sentence(self) -> str:
        return f"Answered by {self.by_whom}: {self.words}"


@kind("direction given")
class DirectionGiven(Fact, kw_only=True):
    """A change by word of mouth: who, to whom, the words; held until confirmed."""

    direction: UUID
    words: str
    by_whom: str
    to_whom: str
    holds: tuple[UUID, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "held by a direction") for m in self.holds]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("direction", self.direction)

    def sentence(self) -> str:
        return f"Verbal direction from {self.by_whom}: {self.words}"


@kind("direction settled")
class DirectionSettled(Fact, kw_only=True):
    """A verbal direction was confirmed in writing, or not followed."""

    direction: UUID
    confirmed: bool
    words: str = ""
    sheet: UUID | None = None

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("direction", self.direction)
        if self.sheet:
            yield MatterLink("sheet", self.sheet)

    def sentence(self) -> str:
        done = "confirmed in writing" if self.confirmed else "not followed"
        return f"Verbal direction {done}. {self.words}".strip()
