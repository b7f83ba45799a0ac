"""Visits, requests, handovers and holds as rows.

A fold is total: words longer than their column are cut here, in the row; the record
keeps them whole.
"""

from __future__ import annotations

from datetime import datetime
from uuid import UUID

import msgspec

from jobs.kinds import handovers, holds, requests, visits
from jobs.models import Handover, Hold, Request, Visit
from stakes.record import Counted
from stakes.record.folds import Columns, fold_of

MOST_MINUTES = 100_000


@fold_of("visit", model=Visit)
def visit(happened: list[Counted]) -> Columns | None:
    """The last plan counts; what happened on site is added to it, whenever it arrives."""
    row: Columns | None = None
    outcomes: dict[str, Columns] = {}
    later: Columns = {
        "arrived_at": None,
        "left_at": None,
        "cancelled": "",
        "weather": "",
    }
    later |= {"standby_minutes": 0, "ticket": "", "ticket_by": ""}
    for said in happened:
        match said.fact:
            case visits.VisitPlanned() as plan:
                row = _planned(plan)
            case visits.VisitCancelled(reason=reason):
                later["cancelled"] = reason
            case visits.CrewArrived(weather=weather):
                later |= {"arrived_at": said.happened_at, "weather": weather[:200]}
            case visits.CrewStoodBy(since=since, until=until):
                later["standby_minutes"] += _minutes(since, until)
            case visits.CrewLeft():
                later["left_at"] = said.happened_at
            case visits.TaskEnded() as ended:
                outcomes[str(ended.task)] = _outcome(ended)
            case visits.DayTicketClosed(signature=signature, signed_by=name):
                later |= {"ticket": signature, "ticket_by": name[:200]}
    if row is None:
        return None
    row["tasks"] = [task | outcomes.get(task["task"], {}) for task in row["tasks"]]
    return row | later


def _minutes(since: datetime, until: datetime) -> int:
    """Whole minutes of a wait; a nonsense span must not break the row it stands in."""
    return max(0, min(int((until - since).total_seconds() // 60), MOST_MINUTES))


def _planned(plan: visits.VisitPlanned) -> Columns:
    return {
        "crew": plan.crew[:120],
        "members": msgspec.to_builtins(plan.members),
        "tasks": msgspec.to_builtins(plan.tasks),
        "words": plan.words,
        "starts_at": plan.starts_at,
        "ends_at": plan.ends_at,
    }


def _outcome(ended: visits.TaskEnded) -> Columns:
    return {
        "outcome": ended.outcome,
        "sent_away_by": ended.sent_away_by,
        "remark": ended.remark,
    }


@fold_of("request", model=Request)
def request(happened: list[Counted]) -> Columns | None:
    """A request runs: received, accepted or declined, placed, closed; or taken back.

    A visit that is cancelled, planned without it or ended with the task undone leaves
    it waiting for another one.
    """
    row: Columns | None = None
    ask: UUID | None = None
    undecided = "received"
    for said in happened:
        match said.fact:
            case requests.RequestMade() as made:
                row, ask = _made(made, said), made.ask
            case _ if row is None or ask is None:
                continue
            case requests.RequestAccepted() as accepted:
                row |= _accepted(accepted, row)
                undecided = "accepted"
            case requests.RequestDeclined(reason=reason):
                row |= {"state": "declined", "reason": reason}
            case requests.CostAnswered(accepted=accepted):
                row["cost"] = "accepted" if accepted else "disputed"
            case requests.RequestWithdrawn(reason=reason):
                row |= {"state": "withdrawn", "reason": reason}
            case requests.RequestClosed():
                row |= {"state": "closed", "closed_at": said.happened_at}
            case visits.VisitPlanned(visit=key, taken_off=taken_off):
                off = ask in taken_off
                row |= _waits(row, key, undecided) if off else _placed(row, key)
            case visits.VisitCancelled(visit=key):
                row |= _waits(row, key, undecided)
            case visits.TaskEnded(visit=key, outcome=outcome) if outcome != "done":
                row |= _waits(row, key, undecided)
    return row


def _accepted(accepted: requests.RequestAccepted, row: Columns) -> Columns:
    """Accepting a request that is on a visit already leaves it there."""
    return {
        "state": "scheduled" if row["state"] == "scheduled" else "accepted",
        "promised_for": accepted.promised_for,
        "payer": accepted.payer[:120],
    }


def _placed(row: Columns, visit: UUID) -> Columns:
    is_open = row["state"] in ("received", "accepted", "scheduled")
    return {"visit": visit, "state": "scheduled" if is_open else row["state"]}


def _waits(row: Columns, visit: UUID, state: str) -> Columns:
    """It needs another visit, unless it has been put on one already."""
    if row["state"] != "scheduled" or row["visit"] != visit:
        return {}
    return {"visit": None, "state": state}


def _made(made: requests.RequestMade, said: Counted) -> Columns:
    return {
        "sort": made.sort,
        "company": made.company[:36],
        "company_name": made.company_name[:120],
        "asked_by": said.name[:200],
        "asked_by_id": said.person,
        "listed": [str(mark) for mark in made.listed],
        "words": made.words,
        "received_at": said.happened_at,
        "needed_by": made.needed_by,
        "earliest": made.earliest,
        "built_from": made.built_from,
        "state": "received",
        "promised_for": None,
        "visit": None,
        "payer": "",
        "cost": "",
        "reason": "",
        "closed_at": None,
        "number": said.number,
    }


@fold_of("handover", model=Handover)
def handover(happened: list[Counted]) -> Columns | None:
    """What was given, then what was answered later."""
    row: Columns | None = None
    for said in happened:
        match said.fact:
            case handovers.HandedOver() as given:
                row = _given(given, said)
            case handovers.HandoverAnswered() as answer if row is not None:
                row |= {
                    "answered_at": said.happened_at,
                    "answer": "acknowledged" if answer.acknowledged else "declined",
                    "answer_words": answer.words,
                }
    return row


def _given(given: handovers.HandedOver, said: Counted) -> Columns:
    return {
        "listed": [str(mark) for mark in given.listed],
        "company": given.company[:36],
        "company_name": given.company_name[:120],
        "to_whom": given.to_whom[:120],
        "signature": given.signature,
        "words": given.words,
        "left_with": given.left_with[:120],
        "lacking": list(given.lacking),
        "ask": given.ask,
        "visit": given.visit,
        "given_at": said.happened_at,
        "given_by": said.name,
        "answered_at": None,
        "answer": "",
        "answer_words": "",
    }


@fold_of("hold", model=Hold)
def hold(happened: list[Counted]) -> Columns | None:
    """Which marks a hold still covers, and who has heard of it."""
    row: Columns | None = None
    for said in happened:
        match said.fact:
            case holds.HoldSent() as sent:
                row = _sent(sent, said)
            case holds.HoldLifted(listed=listed) if row is not None:
                lifted = {str(mark) for mark in listed}
                row["in_force"] = [m for m in row["in_force"] if m not in lifted]
                row["lifted_at"] = None if row["in_force"] else said.happened_at
            case holds.HoldHeard() as heard if row is not None:
                row["heard"].append(_heard(heard, said))
    return row


def _sent(sent: holds.HoldSent, said: Counted) -> Columns:
    listed = [str(mark) for mark in sent.listed]
    return {
        "listed": listed,
        "in_force": list(listed),
        "companies": list(sent.to_companies),
        "words": sent.words,
        "reason": sent.reason,
        "sent_at": said.happened_at,
        "sent_by": "the firm's rule" if sent.sent_by_rule else said.name,
        "lifted_at": None,
        "heard": [],
    }


def _heard(heard: holds.HoldHeard, said: Counted) -> Columns:
    return {
        "how": heard.how,
        "company": heard.company,
        "by": heard.by_whom or said.name,
        "at": said.happened_at.isoformat(),
        "words": heard.words,
    }
