"""Put a lost mark back: by a computed way, with the check that proves it, in one act."""

from __future__ import annotations

import math
import uuid
from collections.abc import Sequence
from datetime import datetime

from geometry.errors import GeometryError
from geometry.units import Angle, AngleUnit, Length
from geometry.ways import Check, Way
from stakes.actions.once import follows
from stakes.actions.passing import NO_PASSAGE, Passage
from stakes.actions.setting import AsStaked, set_stake
from stakes.actions.told import short
from stakes.kinds.checking import StakeChecked
from stakes.kinds.setting import WayUsed
from stakes.kinds.words import OldStake
from stakes.models import Entry, Record
from stakes.queries import judging, means, ways
from stakes.queries.state import job_state
from stakes.record import By, Known, Refused, Said, append, held
from stakes.record.lengths import Measured


def put_back(
    *,
    record: Record,
    mark: uuid.UUID,
    by: By,
    rank: int | None = None,
    described: str = "",
    reason: str = "",
    setup: uuid.UUID | None = None,
    check_setup: uuid.UUID | None = None,
    measured: Measured | None = None,
    measured_angle: str = "",
    holds: str = "hub and tack",
    staked: AsStaked | None = None,
    elevation: Measured | None = None,
    old: OldStake | None = None,
    match: str = "",
    passage: Passage = NO_PASSAGE,
    acknowledged: Sequence[str] = (),
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    ask: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> list[Entry]:
    """Record that a mark was put back, and the check made of it, in one act.

    `rank` chooses one of the ways offered now; without one `described` says how it was
    done otherwise. A way with warnings takes a word of `reason`. `measured` (or
    `measured_angle`) is what the way's own check gave; it is judged against what the
    record computes. A stake put back from stakes alone stays provisional.
    """
    key = key or uuid.uuid4()
    with held(record) as locked:
        state = job_state(locked)
        found = ways.ways_for(state, mark)
        way = found.way(rank) if rank is not None else None
        used = _used(found, way, described, reason)
        entry = set_stake(
            record=locked,
            mark=mark,
            by=by,
            setup=setup,
            holds=holds,
            staked=staked,
            elevation=elevation,
            old=old,
            way=used,
            match=match,
            provisional=bool(way and way.provisional),
            method=_method(way),
            passage=passage,
            acknowledged=acknowledged,
            remark=remark,
            photos=photos,
            occasion=occasion,
            ask=ask,
            at=at,
            key=key,
        )
        entries = [entry]
        if way is not None and (measured is not None or measured_angle):
            check_key = follows(key, "check")
            said = _checked(
                locked,
                found,
                way,
                check_setup or setup,
                measured,
                measured_angle,
                by,
                check_key,
            )
            if not Entry.objects.filter(record=locked, key=check_key).exists():
                kept = Said(fact=said, at=at, known=Known.MEASURED, key=check_key)
                entries += append(locked, kept, by=by, act=entry.act)
    return entries


def _used(
    found: ways.WaysBack, way: Way | None, described: str, reason: str
) -> WayUsed:
    if way is None:
        words = short(described, "described", 500)
        if not words:
            raise Refused(
                "How it was put back is not said.",
                do="Choose a way, or describe what was done.",
                field="described",
            )
        return WayUsed(method=ways.OTHERWISE, numbers=(words,), reason=reason.strip())
    if way.needs_reason and not reason.strip():
        raise Refused(
            "This way is weak: " + " ".join(c.value for c in way.cautions),
            do="Say in a word why it is used all the same.",
            field="reason",
        )
    return WayUsed(
        method=str(way.kind),
        marks=tuple(uuid.UUID(key) for key in way.marks),
        numbers=tuple(ways.number_words(found, number) for number in way.numbers),
        predicted=f"95 % within {ways.size_words(found, way.semi_major_m)}",
        reason=short(reason, "reason", 500),
    )


def _method(way: Way | None) -> str:
    if way is None:
        return ways.OTHERWISE
    by_station = ("polar", "free station", "station")
    return "total station" if any(w in str(way.kind) for w in by_station) else "tape"


def _checked(
    record: Record,
    found: ways.WaysBack,
    way: Way,
    setup: uuid.UUID | None,
    measured: Measured | None,
    angle: str,
    by: By,
    key: uuid.UUID,
) -> StakeChecked:
    """The way's own check as it was made, judged and graded."""
    check = ways.own_check(way)
    difference, computed = _difference(record, found, check, measured, angle)
    component = "e" if way.component == "elevation" else "p"
    judgement = judging.judge(
        difference,
        found.limits,
        component,
        ways.in_metres(found, check, check.sd),
        record.length_unit,
        measured=measured,
        computed=computed,
    )
    state = job_state(record)
    others = [
        state.marks[uuid.UUID(end)]
        for end in (check.at, check.to)
        if end in found.labels and end != str(found.view.key)
    ]
    judged = [state.marks[found.view.key]]
    made_with = means.check_means(
        state,
        check=key,
        setup=setup,
        control=[other.key for other in others],
        method=check.with_,
        instrument="",
        person=by.person,
    )
    worth = means.worth(state, judged, others, made_with, component)
    return StakeChecked(
        check=key,
        sort="elevation" if component == "e" else "angle" if angle else "distance",
        listed=(found.view.key,),
        other=tuple(other.key for other in others),
        setup=setup,
        set_by=tuple(v.stake.setup for v in judged if v.stake and v.stake.setup),
        components=component,  # type: ignore[arg-type]
        judgement=judgement,
        angle=angle,
        grade=worth.grade,
        reaches=tuple(str(r) for r in worth.reaches),  # type: ignore[arg-type]
        instrument=check.with_,
    )


def _difference(
    record: Record,
    found: ways.WaysBack,
    check: Check,
    measured: Measured | None,
    angle: str,
) -> tuple[float, Measured | None]:
    """Measured less expected, across the point in metres, and what was expected."""
    if check.unit == "rad":
        try:
            read = Angle.parse(angle, AngleUnit.DMS).radians
        except GeometryError as error:
            raise Refused(str(error), field="measured_angle") from error
        turn = (read - check.expected + math.pi) % (2 * math.pi) - math.pi
        return ways.in_metres(found, check, turn), None
    if measured is None:
        raise Refused(
            "The check was not measured.",
            do="Measure it, or leave the check for later.",
            field="measured",
        )
    computed = Length.from_metres(
        check.expected, record.length_unit, found.unit_digits + 1
    )
    return measured.metres - check.expected, Measured.of(computed)
