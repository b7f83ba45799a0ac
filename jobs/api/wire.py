"""How things of a job are written as JSON: exact numbers as text, moments in UTC."""

from __future__ import annotations

from datetime import datetime
from typing import Any

from geometry.units import Length
from stakes.models import Record
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
