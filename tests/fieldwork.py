"""A job ready for the field: verified control, two benchmarks, four building stakes.

Control stands on a square of 200 ft about a building of 40 by 60 ft, so that distances
can be worked out in the head.
"""

from __future__ import annotations

import uuid
from datetime import datetime

from stakes.actions.cautions import record_locate
from stakes.actions.setups import Use, open_setup
from stakes.kinds.cautions import UtilityOwner
from stakes.kinds.control import CovarianceBlock, ValueAdopted
from stakes.models import Record
from stakes.queries.setup_checks import CheckMade
from stakes.record import By, append
from tests.builders import (
    CHIEF,
    MORNING,
    SURVEYOR,
    after,
    make_record,
    measured,
    plan,
    row,
)

CONTROL = {
    "CP1": ("1000.00", "2000.00"),
    "CP2": ("1200.00", "2000.00"),
    "CP3": ("1200.00", "2200.00"),
    "CP4": ("1000.00", "2200.00"),
}
BENCHMARKS = {"BM1": "500.00", "BM2": "503.25"}
STAKES = {
    "101": ("1080.00", "2080.00"),
    "102": ("1120.00", "2080.00"),
    "103": ("1120.00", "2140.00"),
    "104": ("1080.00", "2140.00"),
}
DESIGN = "498.50"
Marks = dict[str, uuid.UUID]


def field_job(
    record: Record | None = None, *, at: datetime = MORNING
) -> tuple[Record, Marks]:
    """The record and its marks by label."""
    record = record or make_record()
    rows = [
        row(label, n, e, "500.00", purpose="control")
        for label, (n, e) in CONTROL.items()
    ]
    rows += [
        row(label, "990.00", "1990.00", z, purpose="benchmark", carries="elevation")
        for label, z in BENCHMARKS.items()
    ]
    rows += [
        row(
            label,
            n,
            e,
            DESIGN,
            sort="building corner",
            line="wall line A",
            offset=measured("5.00"),
            refers_to="top of footing",
            tolerance="Building corners and gridlines",
        )
        for label, (n, e) in STAKES.items()
    ]
    keys = plan(record, *rows, at=at)
    marks = dict(zip([r.label for r in rows], keys, strict=True))
    for label in [*CONTROL, *BENCHMARKS]:
        adopt(record, marks, label, at=at)
    return record, marks


def adopt(record: Record, marks: Marks, label: str, *, at: datetime) -> None:
    north, east = CONTROL.get(label, ("", ""))
    fact = ValueAdopted(
        value=uuid.uuid4(),
        mark=marks[label],
        carries="both" if north else "elevation",
        northing=measured(north) if north else None,
        easting=measured(east) if east else None,
        elevation=measured(BENCHMARKS.get(label, "500.00")),
        source="traverse and level loop",
        covariance=CovarianceBlock(nn="1", ee="1", zz="1"),
    )
    append(record, fact, by=SURVEYOR, at=at)


def locate(record: Record, *, at: datetime = MORNING, **more: object) -> uuid.UUID:
    """A ticket for the whole job, answered, valid for ten days."""
    return record_locate(
        record=record,
        **{
            "number": "T-1200",
            "whose": "General contractor",
            "area": "whole site",
            "valid_from": at,
            "valid_to": after(60 * 24 * 10),
            "owners": [UtilityOwner(owner="Gas", answer="marked")],
            "private_lines": "none there",
            "by": CHIEF,
            "at": at,
            **more,
        },  # type: ignore[arg-type]
    )


def station(
    record: Record,
    marks: Marks,
    *,
    at: datetime = MORNING,
    measured_m: str = "282.84",
    by: By = CHIEF,
    **more: object,
) -> uuid.UUID:
    """A total station on CP1, oriented on CP2, checked on CP3 by distance and height."""
    return open_setup(
        record=record,
        **{
            "sort": "total station on a mark",
            "used": [Use(marks["CP1"], "occupied"), Use(marks["CP2"], "oriented on")],
            "checks": [
                CheckMade(marks["CP3"], "distance", measured(measured_m)),
                CheckMade(marks["CP3"], "elevation", measured("500.01")),
            ],
            "instrument": "total station",
            "serial": "30417",
            "calibrated_on": "2026-01-12",
            "by": by,
            "at": at,
            **more,
        },  # type: ignore[arg-type]
    )
