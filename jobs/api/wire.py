"""How things of a job are written as JSON: exact numbers as text, moments in UTC."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime
from typing import Any

from django.db.models import Model

from geometry.units import Length
from stakes.models import Record
from stakes.queries.history import Line
from stakes.queries.state import MarkView
from stakes.record import Counted
from stakes.standing.trust import Judged


def mark(view: MarkView, record: Record) -> dict[str, Any]:
    """A mark as it stands: the plan, the ground, and what may be trusted."""
    plan, stake = view.plan, view.stake
    return {
        "key": str(view.key),
        "label": view.label,
        "purpose": plan.purpose,
        "sort": plan.sort,
        "stage": plan.stage,
        "carries": plan.carries,
        "line": plan.line,
        "unit": record.unit,
        "northing": in_unit(plan.northing_nm, record),
        "easting": in_unit(plan.easting_nm, record),
        "elevation": in_unit(plan.elevation_nm, record),
        "standing": str(view.standing),
        "position": judged(view.position),
        "elevation_trust": judged(view.elevation),
        "on_hold": view.held_back,
        "stake": None
        if stake is None
        else {
            "ordinal": stake.ordinal,
            "set_at": moment(stake.set_at),
            "last_seen": moment(stake.last_seen),
            "first_missing": moment(stake.first_missing),
            "setup": str(stake.setup) if stake.setup else None,
            "handed_over": stake.handed_over,
            "provisional": stake.provisional,
        },
    }


CHECK = [
    "key",
    "sort",
    "listed",
    "other",
    "setup",
    "components",
    "grade",
    "reaches",
    "verdict",
    "made_at",
    "made_by",
    "number",
]
VISIT = [
    "key",
    "crew",
    "starts_at",
    "ends_at",
    "arrived_at",
    "left_at",
    "cancelled",
    "ticket",
]
HANDOVER = [
    "key",
    "listed",
    "company_name",
    "to_whom",
    "signature",
    "words",
    "left_with",
    "lacking",
    "given_at",
    "given_by",
    "answer",
    "answer_words",
    "answered_at",
]
HOLD = ["key", "listed", "in_force", "words", "sent_at", "sent_by", "lifted_at"]


def columns(row: Model, names: Sequence[str]) -> dict[str, Any]:
    """The columns of a row that are told."""
    return {name: getattr(row, name) for name in names}


def task(task: dict[str, Any]) -> dict[str, Any]:
    """A task of a visit; the request it answers only to those who may open it."""
    told = ("task", "sort", "words", "listed", "outcome", "sent_away_by", "remark")
    found = {name: task[name] for name in told if name in task}
    return found | ({"ask": task["ask"]} if task.get("opens") else {})


def line(one: Line, *, with_entry: bool) -> dict[str, Any]:
    """One thing said of a mark; the entry itself for readers of the whole record."""
    said = one.said
    told = {
        "happened_at": moment(said.happened_at),
        "recorded_at": moment(said.recorded_at),
        "late": one.is_late,
        "name": said.name,
        "known": said.known,
        "kind": said.kind,
        "sentence": one.sentence,
        "verdict": one.verdict,
        "details": dict(one.details),
        "not_recorded": list(one.missing),
        "counts": one.counts,
        "overruled_by": said.overruled_by,
    }
    return told | ({"remark": one.remark, "entry": entry(said)} if with_entry else {})


def judged(one: Judged) -> dict[str, Any]:
    return {
        "trust": str(one.trust),
        "reason": one.reason,
        "marks": [str(key) for key in one.marks],
    }


def entry(said: Counted) -> dict[str, Any]:
    """An entry with its hashed body, and whether it still counts."""
    return {
        "number": said.number,
        "key": str(said.key),
        "kind": said.kind,
        "counts": said.counts,
        "overruled_by": said.overruled_by,
        "leaf": said.entry.leaf,
        "body": said.body,
    }


def in_unit(nanometres: str, record: Record) -> str | None:
    """Exact nanometres as text in the job's unit, to a tenth of a millimetre."""
    if not nanometres:
        return None
    digits = 4
    length = Length.from_nanometres(int(nanometres), record.length_unit, digits)
    return length.shown(record.length_unit, digits)


def moment(at: datetime | None) -> str | None:
    return at.isoformat() if at else None
