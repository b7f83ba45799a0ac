"""Adopt values for control: the surveyor's word, with its source and its date."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

from geometry.units import Length
from stakes.actions.issuing import Adoption
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.exchange.rows import LEGAL
from stakes.kinds.control import ValueAdopted
from stakes.kinds.words import Carries
from stakes.models import Entry, Mark, Record
from stakes.queries.control import OldValueStake, values_of
from stakes.queries.control import set_on_old_value as _set_on_old_value
from stakes.record import By, Known, Refused, Said, append
from stakes.record.lengths import Measured

FARTHEST_M = 100.0
"""A value this far from the last one is another place, or another unit."""


@dataclass(frozen=True, slots=True)
class Adopted:
    """The entry of a new value, and the stakes set on the old one."""

    entry: Entry
    value: uuid.UUID
    stakes: Sequence[OldValueStake]


def adopt_value(
    *,
    record: Record,
    mark: uuid.UUID,
    source: str,
    by: By,
    northing: Measured | None = None,
    easting: Measured | None = None,
    elevation: Measured | None = None,
    dated: str = "",
    position_mm: float | None = None,
    elevation_mm: float | None = None,
    basis: Sequence[uuid.UUID] = (),
    reason: str = "",
    far_is_meant: bool = False,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Adopted:
    """Adopt coordinates and/or an elevation for a control mark or benchmark.

    The old value is kept; the stakes set on it come back with how much they differ.
    `position_mm`, `elevation_mm`: standard deviations. Legal monuments are refused.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    value = follows(key, "value")

    def do(act: Act) -> list[Entry]:
        row = _control(record, mark)
        carries = _carries(northing, easting, elevation)
        _refuse_far(row, northing, easting, elevation, far_is_meant)
        if values_of(record, mark) and not reason.strip():
            raise Refused(
                f"{row.label} has a value already, and it is not said why it changes.",
                do="Say why: found disturbed, measured anew, a typing mistake ...",
                field="reason",
            )
        if not source.strip():
            raise Refused(
                "The source of the value is missing.",
                do="Name the sheet, the traverse, the level loop or whoever gave it.",
                field="source",
            )
        fact = ValueAdopted(
            value=value,
            mark=mark,
            carries=carries,
            northing=northing,
            easting=easting,
            elevation=elevation,
            source=short(source, "source"),
            dated=short(dated, "dated", 20),
            covariance=Adoption("", "", position_mm, elevation_mm).covariance,
            basis=tuple(basis),
            reason=short(reason, "reason"),
        )
        said = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, said, by=by, act=act)

    entry = once(record, key, asked, do)[0]
    return Adopted(entry, value, _set_on_old_value(record, mark))


def _control(record: Record, mark: uuid.UUID) -> Mark:
    row = Mark.objects.filter(record=record, key=mark).first()
    if row is None:
        raise Refused("There is no such mark on this job.", field="mark")
    if any(word in f"{row.sort} {row.words}".casefold() for word in LEGAL):
        raise Refused(
            f"{row.label} is a legal monument; its place is no value to adopt here.",
            do="Send it to the licensed surveyor: monuments are re-established under "
            "the rules of the place, and recorded there.",
            field="mark",
            code="legal monument",
        )
    if not row.is_control and row.purpose != "foreign":
        raise Refused(
            f"{row.label} is a stake, and stakes have a design, not a value.",
            do="Issue the plan again to move it.",
            field="mark",
            code="not control",
        )
    return row


def _carries(
    northing: Measured | None, easting: Measured | None, elevation: Measured | None
) -> Carries:
    if (northing is None) != (easting is None):
        raise Refused(
            "Only one of northing and easting was given.",
            do="Give both, or leave both empty.",
            field="easting" if easting is None else "northing",
        )
    if northing is None and elevation is None:
        raise Refused(
            "There is no value.",
            do="Give northing and easting, an elevation, or all three.",
            field="northing",
        )
    if northing is None:
        return "elevation"
    return "position" if elevation is None else "both"


def _refuse_far(
    row: Mark,
    northing: Measured | None,
    easting: Measured | None,
    elevation: Measured | None,
    meant: bool,
) -> None:
    """A new value far from the last is a slip of a digit, an axis or a unit."""
    pairs = (
        ("northing", northing, row.northing_nm),
        ("easting", easting, row.easting_nm),
        ("elevation", elevation, row.elevation_nm),
    )
    for field, now, was in pairs:
        if now is None or not was or meant:
            continue
        apart = abs(int(now.nm) - int(was))
        if apart > FARTHEST_M * 1e9:
            unit = now.length.unit
            far = Length.from_nanometres(apart, unit, 2)
            raise Refused(
                f"This {field} is {far.text} {unit} from the value it has.",
                do="Check digits, axes and unit; if it is meant, tick that it is.",
                field=field,
                code="far",
            )
