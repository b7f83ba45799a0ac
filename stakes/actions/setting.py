"""Set a stake: what holds it, where it came to stand, its label, the old one's fate."""

from __future__ import annotations

import uuid
from collections.abc import Collection, Sequence
from dataclasses import dataclass
from datetime import datetime

from geometry.units import Length, Unit
from stakes.actions.cautions import acknowledgements
from stakes.actions.once import Act, once
from stakes.actions.passing import NO_PASSAGE, Passage, passed
from stakes.actions.told import kept_apart, short
from stakes.kinds.setting import StakeSet, WayUsed
from stakes.kinds.words import OldStake
from stakes.models import Entry, Mark, Record
from stakes.queries import labels, measuring
from stakes.queries.before_setting import Before, before_setting
from stakes.queries.gates import Gate
from stakes.queries.state import JobState, MarkView
from stakes.queries.state_then import state_then
from stakes.queries.tolerance import class_of, classes_of
from stakes.record import By, Known, Refused, Said, append
from stakes.record.lengths import Measured
from stakes.standing.marks import Standing


@dataclass(frozen=True, slots=True)
class AsStaked:
    """Where the stake came to stand: as measured, and off the design. Both or neither
    are given by a crew; the other is worked out exactly."""

    northing: Measured | None = None
    easting: Measured | None = None
    off_north: Measured | None = None
    off_east: Measured | None = None


def set_stake(
    *,
    record: Record,
    mark: uuid.UUID,
    by: By,
    setup: uuid.UUID | None = None,
    holds: str = "hub and tack",
    staked: AsStaked | None = None,
    elevation: Measured | None = None,
    capped: bool = False,
    old: OldStake | None = None,
    far: bool = False,
    acknowledged: Collection[str] = (),
    passage: Passage = NO_PASSAGE,
    more_gates: Sequence[Gate] = (),
    way: WayUsed | None = None,
    match: str = "",
    provisional: bool = False,
    method: str = "",
    carries: str = "",
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    ask: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record that a stake was set for a mark; returns its entry.

    `old` says what became of the stake before it, needed when there was one. `far` says
    that numbers beyond the tolerance are what was measured. `acknowledged` holds the
    sorts of caution that were read. `way`, `match`, `provisional`, `more_gates` come
    from putting a lost mark back. Raises Gated or Refused.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        state = state_then(record, at, [mark])
        before = before_setting(
            state,
            mark,
            setup=setup,
            holds=holds,
            person=by.person,
            occasion=occasion,
            at=at,
            another_way=way.method if way else method,
        )
        past, authorised = _passed(before, more_gates, passage)
        view, unit = before.view, record.length_unit
        fate = _old(view, old)
        placed = _placed(view.plan, staked or AsStaked(), unit)
        if not far:
            _refuse_far(record, view.plan, placed, at)
        label = _label(record, before, elevation, by)
        fact = StakeSet(
            mark=mark,
            setup=setup,
            carries=carries or view.plan.carries,  # type: ignore[arg-type]
            holds=short(holds, "holds", 80),
            northing=placed.northing,
            easting=placed.easting,
            elevation=elevation,
            off_north=placed.off_north,
            off_east=placed.off_east,
            cut=label.cut,
            refers_to=view.plan.refers_to,
            label=label.text,
            plain=label.plain,
            capped=capped,
            old=fate,
            way=way,
            match=short(match, "match", 500),
            gates=past,
            authorised_by=short(authorised, "authorised_by", 200),
            provisional=provisional,
            occasion=occasion,
            ask=ask,
            method=method or _method(state, setup),
            photos=tuple(photos),
        )
        measured = elevation is not None or placed.northing is not None
        said = Said(
            fact=fact,
            at=at,
            known=Known.MEASURED if measured else Known.SEEN,
            key=key,
            private=kept_apart(remark),
        )
        return append(
            record,
            [
                said,
                *acknowledgements(
                    before, acknowledged, passage.done, occasion, key, at
                ),
            ],
            by=by,
            act=act,
        )

    return once(record, key, asked, do)[0]


def _passed(
    before: Before, more: Sequence[Gate], passage: Passage
) -> tuple[tuple[str, ...], str]:
    """The gates passed, those of its setup among them, and who authorised it."""
    past, authorised = passed([*before.gates, *more], passage)
    inherited = tuple(f"setup: {words}" for words in before.inherited)
    return (*past, *inherited), authorised or before.inherited_by


def _label(
    record: Record, before: Before, elevation: Measured | None, by: By
) -> labels.Label:
    plan = before.view.plan
    return labels.label_for(
        plan,
        labels.planned_row(plan),
        elevation,
        record.length_unit,
        at=before.at.astimezone(record.time_zone),
        initials=labels.initials_of(by.name),
    )


def _method(state: JobState, setup: uuid.UUID | None) -> str:
    row = state.setups.get(setup) if setup else None
    return measuring.METHODS.get(row.sort, "") if row else ""


def _old(view: MarkView, old: OldStake | None) -> OldStake:
    """What became of the stake before this one; it must be said when there was one."""
    if view.stake is None:
        return "first"
    if old in (None, "first"):
        if view.standing is Standing.GONE:
            return "not found"
        raise Refused(
            f"{view.label} has a stake already.",
            do="Say what became of it: pulled, not found, or left and voided.",
            field="old",
        )
    return old


def _placed(mark: Mark, staked: AsStaked, unit: Unit) -> AsStaked:
    """As-staked values and differences, each worked out exactly from the other."""
    north, off_north = _both(
        staked.northing, staked.off_north, mark.northing_nm, unit, "northing"
    )
    east, off_east = _both(
        staked.easting, staked.off_east, mark.easting_nm, unit, "easting"
    )
    if (north is None) != (east is None):
        raise Refused(
            "Only one of northing and easting was given.",
            do="Give both, or leave both empty.",
            field="easting" if east is None else "northing",
        )
    return AsStaked(north, east, off_north, off_east)


def _both(
    value: Measured | None,
    off: Measured | None,
    design_nm: str,
    unit: Unit,
    field: str,
) -> tuple[Measured | None, Measured | None]:
    if value is not None and off is not None:
        raise Refused(
            f"Both the {field} and its difference were given.",
            do="Give one of them; the other is worked out.",
            field=field,
        )
    if not design_nm:
        return value, None
    design = Length.from_nanometres(int(design_nm), unit, 9)
    if off is not None:
        return Measured.of(design.plus(off.length)), off
    if value is not None:
        return value, Measured.of(value.length.minus(design))
    return None, None


def _refuse_far(
    record: Record, mark: Mark, placed: AsStaked, at: datetime | None
) -> None:
    """Numbers far beyond the tolerance are more often a slip of the thumb than true."""
    if placed.off_north is None or placed.off_east is None:
        return
    limits = class_of(mark, classes_of(record, at))
    if limits.position is None:
        return
    size = (placed.off_north.metres**2 + placed.off_east.metres**2) ** 0.5
    if size <= limits.position.metres:
        return
    unit = record.length_unit
    off = Length.from_metres(size, unit, labels.places(unit) + 1).text
    raise Refused(
        f"By these numbers it stands {off} {unit} off the design; {limits.name} "
        f"allows {limits.position.text} {unit}.",
        do="Mend the numbers, or tick that they are what was measured.",
        field="far",
        code="far",
    )
