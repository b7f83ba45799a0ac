"""Sheets, questions, directions, zones and checks as rows."""

from __future__ import annotations

from typing import Any

from stakes.kinds.checking import JudgedAgain, StakeChecked
from stakes.kinds.planning import ZoneDrawn
from stakes.kinds.sheets import (
    DirectionGiven,
    DirectionSettled,
    QuestionAnswered,
    QuestionAsked,
    SheetRead,
    SheetReceived,
)
from stakes.models import Check, Direction, Question, Sheet, Zone
from stakes.record import Counted
from stakes.record.folds import MatterFold, register

Columns = dict[str, Any]


def sheet(happened: list[Counted]) -> Columns | None:
    """A sheet by its own entries: received once, read by several."""
    columns: Columns | None = None
    read: list[dict[str, str]] = []
    for counted in happened:
        match counted.fact:
            case SheetReceived() as fact:
                columns = _received(fact, counted)
            case SheetRead() as fact if columns is not None:
                read.append(
                    {"name": counted.name, "at": counted.happened_at.isoformat()}
                )
                if fact.sorted_to or fact.changes_nothing:
                    columns["sorted"], columns["touches_all"] = True, False
                    columns["touched"] += [str(m) for m in fact.sorted_to]
    if columns is not None:
        columns["read_by"] = read
    return columns


def _received(fact: SheetReceived, counted: Counted) -> Columns:
    return {
        "sheet_number": fact.number,
        "revision": fact.revision,
        "status": fact.status,
        "title": fact.title,
        "from_whom": fact.from_whom,
        "received_on": fact.received_on,
        "received_at": counted.happened_at,
        "replaces": fact.replaces,
        "replaced_by": None,
        "file_sha256": fact.file_sha256,
        "what_changed": fact.what_changed,
        "touched": [str(m) for m in fact.touched],
        "touches_all": fact.touches_all,
        "sorted": bool(fact.touched),
    }


def question(happened: list[Counted]) -> Columns | None:
    columns: Columns | None = None
    for counted in happened:
        match counted.fact:
            case QuestionAsked() as fact:
                columns = {
                    "words": fact.words,
                    "to_whom": fact.to_whom,
                    "holds": [str(m) for m in fact.holds],
                    "asked_at": counted.happened_at,
                    "asked_by": counted.name,
                    "answered_at": None,
                    "answer": "",
                    "answered_by": "",
                    "in_writing": False,
                }
            case QuestionAnswered() as fact if columns is not None:
                columns |= {
                    "answered_at": counted.happened_at,
                    "answer": fact.words,
                    "answered_by": fact.by_whom,
                    "in_writing": fact.in_writing,
                }
    return columns


def direction(happened: list[Counted]) -> Columns | None:
    columns: Columns | None = None
    for counted in happened:
        match counted.fact:
            case DirectionGiven() as fact:
                columns = {
                    "words": fact.words,
                    "by_whom": fact.by_whom,
                    "to_whom": fact.to_whom,
                    "holds": [str(m) for m in fact.holds],
                    "given_at": counted.happened_at,
                    "settled_at": None,
                    "confirmed": False,
                    "settlement": "",
                }
            case DirectionSettled() as fact if columns is not None:
                columns |= {
                    "settled_at": counted.happened_at,
                    "confirmed": fact.confirmed,
                    "settlement": fact.words,
                }
    return columns


def zone(happened: list[Counted]) -> Columns | None:
    drawn = [c for c in happened if isinstance(c.fact, ZoneDrawn)]
    if not drawn or drawn[-1].fact.removed:  # type: ignore[attr-defined]
        return None
    fact = drawn[-1].fact
    assert isinstance(fact, ZoneDrawn)
    return {
        "name": fact.name,
        "sort": fact.sort,
        "corners_m": [[c.easting.metres, c.northing.metres] for c in fact.corners],
        "closed": fact.closed,
        "height_m": fact.height.metres if fact.height else None,
        "words": fact.words,
        "drawn_in": drawn[-1].number,
    }


def check(happened: list[Counted]) -> Columns | None:
    columns: Columns | None = None
    for counted in happened:
        match counted.fact:
            case StakeChecked() as fact:
                columns = {
                    "sort": fact.sort,
                    "listed": [str(m) for m in fact.listed],
                    "other": [str(m) for m in fact.other],
                    "setup": fact.setup,
                    "components": fact.components,
                    "grade": fact.grade,
                    "reaches": list(fact.reaches),
                    "verdict": fact.judgement.verdict,
                    "made_at": counted.happened_at,
                    "made_by": counted.name,
                    "number": counted.number,
                }
            case JudgedAgain() as fact if columns is not None:
                columns["verdict"] = fact.judgement.verdict
    return columns


class SheetFold(MatterFold):
    """Sheets name each other when one replaces another; each row takes its own part."""

    def _columns(self, key: Any, happened: list[Counted]) -> Columns | None:
        own = [
            c
            for c in happened
            if not isinstance(c.fact, SheetReceived) or c.fact.sheet == key
        ]
        columns = self.fold(own)
        if columns is None:
            return None
        newer = [
            c.fact.sheet
            for c in happened
            if isinstance(c.fact, SheetReceived) and c.fact.replaces == key
        ]
        columns["replaced_by"] = newer[-1] if newer else None
        return columns


register(SheetFold("sheet", Sheet, sheet))
register(MatterFold("question", Question, question))
register(MatterFold("direction", Direction, direction))
register(MatterFold("zone", Zone, zone))
register(MatterFold("check", Check, check))
