"""Facts of files points came from, and of the soil a layout reckons with."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

from stakes.record.kinds import Fact, MatterLink, kind


@kind("file read")
class FileRead(Fact, kw_only=True):
    """Points of a plan were read from a file: its hash, what was answered that the
    file cannot say, and every complaint with its line.

    `rows_root` is the SHA-256 over the rows as they were issued, in order.
    """

    plan: UUID
    file_sha256: str
    file_name: str = ""
    encoding: str = ""
    lines: int
    taken: int
    unit: str
    order: str
    frame: str = ""
    sheet: UUID | None = None
    purpose: str = ""
    stage: str = ""
    left_out: tuple[int, ...] = ()
    complaints: tuple[str, ...] = ()
    rows_root: str = ""

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("plan", self.plan)
        if self.sheet:
            yield MatterLink("sheet", self.sheet)

    def sentence(self) -> str:
        out = f", {len(self.left_out)} left out" if self.left_out else ""
        return f"{self.taken} points read from {self.file_name or 'pasted text'}{out}."


@kind("soil classified")
class SoilClassified(Fact, kw_only=True):
    """The competent person on site classified the soil under a footprint."""

    footprint: UUID
    soil: str
    by_whom: str
    on: str
    conditions: tuple[str, ...] = ()
    words: str = ""

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("zone", self.footprint)

    def sentence(self) -> str:
        return f"Soil classified {self.soil} by {self.by_whom}, {self.on}."
