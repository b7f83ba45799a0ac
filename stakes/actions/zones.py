"""Draw zones and lines from lists of corners: footprints, keep-outs, haul roads ..."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime

from shapely.geometry import Polygon
from shapely.validation import explain_validity

from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.kinds.planning import Corner, ZoneDrawn
from stakes.models import Entry, Mark, Record, Zone
from stakes.record import By, Known, Refused, Said, append, reading
from stakes.record.lengths import Measured

SORTS = (
    "footprint",
    "excavation",
    "keep-out",
    "haul road",
    "property",
    "setback",
    "obstacle",
    "line",
)
MOST_CORNERS = 2000
DOUBLED_M = 0.001


def draw_zone(
    *,
    record: Record,
    name: str,
    sort: str,
    corners: Sequence[Corner],
    by: By,
    closed: bool = True,
    height: Measured | None = None,
    words: str = "",
    basis: Sequence[uuid.UUID] = (),
    zone: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Draw a zone or line, or draw it again under its key (`zone`); returns its key.

    Corners in order, the first not repeated. What crosses itself is refused.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    drawn = zone or follows(key, "zone")

    def do(act: Act) -> list[Entry]:
        if sort not in SORTS:
            raise Refused(f"{sort[:30]!r} is no sort of zone.", field="sort")
        if not name.strip():
            raise Refused("The zone has no name.", do="Give it one.", field="name")
        if zone is not None:
            _found(record, zone)
        shut = closed and sort != "line"
        fact = ZoneDrawn(
            zone=drawn,
            name=short(name, "name", 80),
            sort=sort,
            corners=_sound(corners, shut),
            closed=shut,
            height=height,
            words=short(words, "words", 200),
            basis=tuple(basis),
        )
        said = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, said, by=by, act=act)

    once(record, key, asked, do)
    return drawn


def remove_zone(
    *,
    record: Record,
    zone: uuid.UUID,
    by: By,
    words: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Take a zone off the plan; that it was there stays readable."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        _found(record, zone)
        said = reading.entries(record, thing="zone", key=zone, kinds=[ZoneDrawn.KIND])
        last = said[-1].fact
        assert isinstance(last, ZoneDrawn)
        fact = ZoneDrawn(
            zone=zone,
            name=last.name,
            sort=last.sort,
            corners=last.corners,
            closed=last.closed,
            words=short(words, "words", 200),
            removed=True,
        )
        removed = Said(fact=fact, at=at, known=Known.DECIDED, key=key)
        return append(record, removed, by=by, act=act)

    return once(record, key, asked, do)[0]


def read_corners(text: str, record: Record) -> list[Corner]:
    """Corners as typed, one a line: northing, easting; or the number of a mark.

    Raises Refused with the line that cannot be read.
    """
    lines = [(n, x.strip()) for n, x in enumerate(text.splitlines(), 1) if x.strip()]
    if len(lines) > MOST_CORNERS:
        raise Refused(
            f"{len(lines)} corners are given.",
            do=f"Give at most {MOST_CORNERS}.",
            field="corners",
        )
    named = {x for _, x in lines if len(_parts(x)) == 1}
    marks = {m.label: m for m in Mark.objects.filter(record=record, label__in=named)}
    return [_corner(n, x, marks, record.length_unit) for n, x in lines]


def _corner(number: int, line: str, marks: dict[str, Mark], unit: Unit) -> Corner:
    parts = _parts(line)
    if len(parts) == 1:
        return _at_mark(number, line, marks, unit)
    if len(parts) != 2:
        raise Refused(
            f"Line {number} has {len(parts)} values.",
            do="Write northing and easting with a comma between.",
            field="corners",
        )
    try:
        northing, easting = (Measured.of(Length.parse(p[:60], unit)) for p in parts)
    except GeometryError as error:
        raise Refused(
            f"Line {number} cannot be read: {error}", field="corners"
        ) from error
    return Corner(northing=northing, easting=easting)


def _at_mark(number: int, label: str, marks: dict[str, Mark], unit: Unit) -> Corner:
    mark = marks.get(label)
    if mark is None or not mark.northing_nm or not mark.easting_nm:
        raise Refused(
            f"Line {number}: there is no mark {label[:40]!r} with a place.",
            do="Write northing, easting, or the number of a mark of this job.",
            field="corners",
        )
    north, east = int(mark.northing_nm), int(mark.easting_nm)
    return Corner(
        northing=Measured.of(Length.from_nanometres(north, unit, 4)),
        easting=Measured.of(Length.from_nanometres(east, unit, 4)),
    )


def _parts(line: str) -> list[str]:
    for separator in (",", ";", "\t"):
        if separator in line:
            return [p.strip() for p in line.split(separator)]
    parts = line.split()
    return parts if len(parts) == 2 else [line.strip()]


def _sound(corners: Sequence[Corner], closed: bool) -> tuple[Corner, ...]:
    """The corners, harmless doubling put right; Refused for what is no shape."""
    kept: list[Corner] = []
    for corner in corners:
        if not kept or _apart(kept[-1], corner) > DOUBLED_M:
            kept.append(corner)
    if closed and len(kept) > 1 and _apart(kept[0], kept[-1]) <= DOUBLED_M:
        kept.pop()
    least = 3 if closed else 2
    if len(kept) < least:
        raise Refused(
            f"It has {len(kept)} different corners.",
            do=f"A {'zone' if closed else 'line'} needs at least {least}.",
            field="corners",
        )
    if closed:
        _refuse_crossing(kept)
    return tuple(kept)


def _refuse_crossing(corners: Sequence[Corner]) -> None:
    first = corners[0]
    shape = Polygon(
        [
            (
                c.easting.metres - first.easting.metres,
                c.northing.metres - first.northing.metres,
            )
            for c in corners
        ]
    )
    if shape.convex_hull.area < 0.01:
        raise Refused("The zone has no area.", do="Check its corners.", field="corners")
    if not shape.is_valid:
        crossing = "Self-intersection" in explain_validity(shape)
        raise Refused(
            "The outline crosses itself." if crossing else "The outline is no shape.",
            do="Give the corners in order, going round once.",
            field="corners",
            code="crossing",
        )


def _apart(a: Corner, b: Corner) -> float:
    de = a.easting.metres - b.easting.metres
    dn = a.northing.metres - b.northing.metres
    return float((de * de + dn * dn) ** 0.5)


def _found(record: Record, zone: uuid.UUID) -> Zone:
    row = Zone.objects.filter(record=record, key=zone).first()
    if row is None:
        raise Refused("There is no such zone on this job.", code="no zone")
    return row
