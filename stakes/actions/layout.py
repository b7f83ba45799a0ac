"""Keep a layout as a draft; record the competent person's classification of the soil.

The limit drawn is for placing stakes. It is never an instruction to dig.
"""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from typing import Any

from geometry.layout import Ground, Soil
from geometry.units import Length, Unit
from stakes.actions.issuing import MORE, Keyed, keep_draft
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.exchange.rows import Row
from stakes.kinds.importing import SoilClassified
from stakes.kinds.planning import Corner, LayoutIssued, ZoneDrawn
from stakes.models import Draft, Entry, Record, Zone
from stakes.queries.layout import Asked, Laid, lay_out
from stakes.record import By, Fact, Known, Refused, Said, append
from stakes.record.lengths import Measured

SORT = "offset stake"


def classify_soil(
    *,
    record: Record,
    footprint: uuid.UUID,
    soil: str,
    by_whom: str,
    on: str,
    by: By,
    conditions: Sequence[str] = (),
    words: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Record who classified the soil under a footprint, and when."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        if not Zone.objects.filter(record=record, key=footprint).exists():
            raise Refused("There is no such footprint on this job.", code="no zone")
        if soil not in set(Soil) or set(conditions) - set(Ground):
            raise Refused("This is no class of soil.", field="soil")
        for field, text, what in (
            ("by_whom", by_whom, "It is not said who classified the soil."),
            ("on", on, "It is not said when the soil was classified."),
        ):
            if not text.strip():
                raise Refused(
                    what,
                    do="The competent person on site does it, and it has a day.",
                    field=field,
                )
        fact = SoilClassified(
            footprint=footprint,
            soil=soil,
            by_whom=short(by_whom, "by_whom"),
            on=short(on, "on", 20),
            conditions=tuple(conditions),
            words=short(words, "words", 300),
        )
        said = Said(fact=fact, at=at, known=Known.TOLD, key=key)
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def draft_layout(
    *,
    record: Record,
    asked: Asked,
    by: By,
    title: str = "",
    stage: str = "",
    refers_to: str = "",
    tolerance: str = "",
    lasts: str = "",
    key: uuid.UUID | None = None,
) -> Draft:
    """Work the layout out and keep its stakes as a draft: to be checked, then issued.

    Issuing says the marks, how they were placed, and draws the excavation limit.
    """
    laid = lay_out(record, asked)
    shared = {
        "stage": short(stage, "stage", 40),
        "refers_to": short(refers_to, "refers_to", 80),
        "tolerance": short(tolerance, "tolerance", 60),
        "lasts": short(lasts, "lasts", 40),
    }
    rows = [
        _row(record.length_unit, laid, stake, shared) for stake in laid.chosen.stakes
    ]
    if not rows:
        raise Refused(
            "No stake has room in this layout.",
            do="Try another offset, or look at the fallbacks.",
            field="offset",
            code="no room",
        )
    offset = f"{asked.offset.text} {asked.offset.unit}"
    return keep_draft(
        record=record,
        rows=rows,
        title=title or f"Offsets of {laid.zone.name}",
        sort="layout",
        source=f"offset plan of {laid.zone.name}, at least {offset}",
        about=_about(record.length_unit, laid),
        by=by,
        key=key,
    )


def _row(unit: Unit, laid: Laid, stake: Any, shared: dict[str, str]) -> Row:
    words = stake.reason
    if stake.differs:
        words = f"Differs from the building's offset. {words}"
    return Row(
        row=stake.number,
        label=laid.label(stake),
        purpose="stake",
        carries="position",
        northing=_length(stake.n_m, unit),
        easting=_length(stake.e_m, unit),
        sort=SORT,
        line=f"{stake.label}, {stake.end} end"[:80],
        words=words[:200],
        offset=_length(stake.offset_m, unit, 2 if unit.is_foot else 3),
        **shared,
    )


def _about(unit: Unit, laid: Laid) -> dict[str, Any]:
    asked, dig = laid.asked, laid.plan.excavation
    texts = {
        name: [getattr(asked, name).text, getattr(asked, name).unit]
        for name in ("offset", "depth", "work_space", "clearance")
    }
    limit = [[float(e), float(n)] for e, n in dig.limit] if asked.depth.metres else []
    return {
        **texts,
        "footprint": str(asked.footprint),
        "building": laid.zone.name,
        "soil": str(dig.soil) if laid.soil else "assumed 1 1/2:1, not classified",
        "soil_by": f"{laid.soil.by_whom}, {laid.soil.on}" if laid.soil else "",
        "rule": f"{asked.stake_set} set. {laid.plan.offset_reason}",
        "issues": [*laid.sentences, *(e.reason for e in laid.plan.no_room)],
        "caution": dig.caution,
        "limit_m": limit,
    }


def _issued(draft: Draft, keyed: Sequence[Keyed]) -> list[Fact]:
    """What issuing a layout says besides its marks."""
    about = draft.about
    unit = draft.record.length_unit

    def measured(name: str) -> Measured:
        text, of = about[name]
        return Measured.of(Length.parse(text, Unit(of)))

    footprint = uuid.UUID(about["footprint"])
    facts: list[Fact] = [
        LayoutIssued(
            plan=draft.key,
            footprint=footprint,
            offset=measured("offset"),
            depth=measured("depth"),
            work_space=measured("work_space"),
            clearance=measured("clearance"),
            soil=about["soil"],
            soil_by=about["soil_by"],
            rule=about["rule"],
            issues=tuple(about["issues"]),
            listed=tuple(key for _, key in keyed),
        )
    ]
    if about["limit_m"]:
        facts.append(_limit(about, footprint, unit))
    return facts


def _limit(about: dict[str, Any], footprint: uuid.UUID, unit: Unit) -> Fact:
    assumed = "" if about["soil_by"] else ", assumed"
    return ZoneDrawn(
        zone=follows(footprint, "excavation limit"),
        name=f"{about['building']}, limit for stakes"[:80],
        sort="excavation",
        corners=tuple(
            Corner(northing=_length(n, unit, 2), easting=_length(e, unit, 2))
            for e, n in about["limit_m"]
        ),
        words=f"limit for placing stakes{assumed}; not for digging",
    )


MORE["layout"] = _issued


def _length(metres: float, unit: Unit, decimals: int = 4) -> Measured:
    return Measured.of(Length.from_metres(metres, unit, decimals))
