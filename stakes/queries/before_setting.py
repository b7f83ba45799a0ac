"""All that is looked at before a stake is driven: its gates and its cautions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

from django.utils import timezone
from shapely import Point, Polygon

from geometry.units import Length
from stakes.kinds.planning import LayoutIssued
from stakes.models import Mark, Record, Setup, Zone
from stakes.queries import gates, held_by, locates, setups
from stakes.queries.state import JobState, MarkView
from stakes.record import Refused, reading
from stakes.record.lengths import Measured

EDGE_M = 0.6096
"""Two feet: how far spoil and equipment stay back from an edge (29 CFR 1926.651(j)(2))."""

DEPTH_ASSUMED_M = 3.048
"""Ten feet, where no depth of the excavation is recorded."""

BREAKS_NO_GROUND = frozenset(
    {
        "nail on batter board",
        "nail in pavement",
        "chisel cross",
        "paint mark",
        "scribe on concrete",
    }
)
"""What holds a mark without being driven into the ground."""

HOLDS = (
    "hub and tack",
    "hub and nail",
    "iron rod",
    "spike",
    "lath only",
    *sorted(BREAKS_NO_GROUND),
)
"""What usually holds a mark; anything else may be written."""


@dataclass(frozen=True, slots=True)
class Caution:
    """A danger said at the moment it matters; acknowledged once a day by each person."""

    sort: str
    words: str
    who: str


@dataclass(frozen=True, slots=True)
class Before:
    """What is known before a stake is driven for one mark."""

    view: MarkView
    at: datetime
    gates: tuple[gates.Gate, ...]
    inherited: tuple[str, ...]
    inherited_by: str
    cautions: tuple[Caution, ...]
    ticket: locates.Ticket | None
    recheck_due: str


def breaks_ground(holds: str) -> bool:
    """Whether what holds the mark is driven into the ground; unknown things are."""
    return holds.strip().lower() not in BREAKS_NO_GROUND


def before_setting(
    state: JobState,
    mark: UUID,
    *,
    setup: UUID | None = None,
    holds: str = "",
    person: str = "",
    occasion: UUID | None = None,
    at: datetime | None = None,
    another_way: str = "",
) -> Before:
    """Gates and cautions of setting one mark from one setup, at a moment."""
    record, view = state.record, mark_called(state, mark)
    moment = at or timezone.now()
    row = setups.setup_called(record, setup) if setup else None
    tickets = locates.tickets(record, moment)
    driven = breaks_ground(holds)
    asked = gates.SettingAsked(
        view=view,
        at=moment,
        setup=row,
        setup_doubt=_setup_doubt(state, view, setup, moment),
        heights=setups.height_marks(state, setup) if setup else (),
        questions=held_by.questions(record, mark, moment),
        directions=held_by.directions(record, mark, moment),
        sheets=held_by.newer_sheets(record, view.plan, moment),
        breaks_ground=driven,
        tickets=tickets,
        another_way=another_way,
    )
    opened = setups.opening_of(record, setup) if setup else None
    ticket, _ = locates.valid_ticket(tickets, view.plan, moment)
    read = locates.acknowledged(record, person, moment, occasion)
    cautions = [
        c
        for c in _cautions(record, view.plan, ticket, driven, moment)
        if (c.sort, c.words) not in read
    ]
    return Before(
        view=view,
        at=moment,
        gates=tuple(gates.for_setting(asked)),
        inherited=opened.gates if opened else (),
        inherited_by=opened.authorised_by if opened else "",
        cautions=tuple(cautions),
        ticket=ticket,
        recheck_due=_due(row, moment),
    )


def mark_called(state: JobState, mark: UUID) -> MarkView:
    """The mark of this job with this key; Refused when there is none."""
    view = state.marks.get(mark)
    if view is None:
        raise Refused(
            "There is no such mark on this job.",
            do="Choose the mark from the list.",
            field="mark",
            code="no mark",
        )
    return view


def _setup_doubt(
    state: JobState, view: MarkView, setup: UUID | None, at: datetime
) -> str:
    if setup is None:
        return ""
    carries = {"position": "p", "elevation": "e"}.get(view.plan.carries, "pe")
    return setups.doubt_of(state, setup, carries, at)


def _due(row: Setup | None, at: datetime) -> str:
    """How long since the setup was last found right, when that is too long."""
    passed = row.passed_at if row else None
    if passed is None or at - passed <= setups.RECHECK_EVERY:
        return ""
    return setups.ago(int((at - passed) / timedelta(minutes=1)))


def _cautions(
    record: Record,
    mark: Mark,
    ticket: locates.Ticket | None,
    driven: bool,
    at: datetime,
) -> list[Caution]:
    found = [
        Caution(h.sort, h.words, _WHO[h.sort]) for h in locates.hazards(record, at)
    ]
    if driven and ticket and ticket.fact.private_lines == "not asked":
        found.append(
            Caution(
                "private lines",
                f"Ticket {ticket.fact.number} covers the utilities' own lines. Private "
                "lines (between buildings, lighting, irrigation) were not asked for.",
                "Ask the owner of the site; the competent person decides.",
            )
        )
    return found + _edges(record, mark)


def _edges(record: Record, mark: Mark) -> list[Caution]:
    """The mark lies in an excavation, or so near that its edge may go."""
    if mark.easting_m is None or mark.northing_m is None:
        return []
    point, found = Point(mark.easting_m, mark.northing_m), []
    zones = [
        zone
        for zone in Zone.objects.filter(
            record=record, sort__iexact="excavation", closed=True
        )
        if len(zone.corners_m) > 2
    ]
    laid_out = _layout_depth(record) if zones else None
    for zone in zones:
        away = Polygon(zone.corners_m).distance(point)
        depth, known = _depth(zone, laid_out)
        if away <= EDGE_M + depth:
            found.append(_edge(record, zone.name, away == 0, depth, known))
    return found


def _edge(
    record: Record, name: str, inside: bool, depth: float, known: bool
) -> Caution:
    unit = record.length_unit
    deep = Length.from_metres(depth, unit, 1).text
    how = "deep" if known else "deep, assumed: no depth is recorded"
    edge = f"{Length.from_metres(EDGE_M, unit, 1).text} {unit}"
    where = "lies in" if inside else f"lies within its depth and {edge} of"
    return Caution(
        "excavation edge",
        f"This mark {where} excavation {name} ({deep} {unit} {how}). Do not enter it; "
        "keep spoil, equipment and yourself back from its edge.",
        "The competent person on site decides (29 CFR 1926.651 and 652).",
    )


def _layout_depth(record: Record) -> float | None:
    """The depth by which the offset stakes were last placed."""
    issued = reading.entries(record, kinds=[LayoutIssued.KIND])
    depths: Sequence[Measured] = [c.fact.depth for c in issued]  # type: ignore[attr-defined]
    return depths[-1].metres if depths else None


def _depth(zone: Zone, laid_out: float | None) -> tuple[float, bool]:
    """The recorded depth of an excavation, else that of the last layout, else assumed."""
    if zone.height_m:
        return abs(zone.height_m), True
    if laid_out is not None:
        return laid_out, True
    return DEPTH_ASSUMED_M, False


_WHO = {
    "traffic": "Vests and traffic control as the plan says (23 CFR 634, MUTCD Part 6); "
    "the competent person on site decides.",
    "overhead line": "Keep rods and prism poles at least 10 ft away, more above 50 kV "
    "(29 CFR 1910.333); the competent person on site decides.",
    "rail": "Right of entry and roadway-worker rules first (49 CFR 214); the railway "
    "decides.",
    "moving plant": "Tell the operators where you stand before you go there; the "
    "competent person on site decides.",
}
