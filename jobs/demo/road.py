"""Job two, in metres: a small road with stationed offset stakes and a station equation."""

from __future__ import annotations

import math
import uuid

from geometry.alignment import (
    Bend,
    alignment_through,
    place,
    stationing,
    stations_at,
)
from jobs.actions.open_job import open_job
from jobs.actions.seats import give_seat
from jobs.demo.telling import METRE, ZONE, Cast, Story, first_monday
from jobs.kinds.terms import NoticeRule
from jobs.rights import Role
from stakes.actions.cautions import record_locate
from stakes.actions.issuing import Adoption, check_plan, issue_plan, plan_marks
from stakes.actions.passing import Passage
from stakes.actions.retiring import retire_marks
from stakes.actions.setting import set_stake
from stakes.actions.setups import Use, open_setup
from stakes.actions.zones import draw_zone
from stakes.kinds.planning import Corner
from stakes.queries.setup_checks import CheckMade

POINTS = [(2000.0, 1000.0), (2090.0, 1060.0), (2210.0, 1050.0)]
EQUATION = (1100.0, 1120.0)
"""Station 11+00 back is 11+20 ahead: the line was shortened after staking began."""


def tell_road(cast: Cast) -> Story:
    """The road from opening to its first stage retired."""
    monday = first_monday()
    job = open_job(
        number="2620",
        name="Quay lane",
        place="From the clinic to the ferry",
        unit=METRE,
        zone=ZONE,
        frame="local site grid, ground distances",
        notice=NoticeRule(count=2, of="business days"),
        by=cast.by("manager"),
        at=monday,
    )
    story = Story(job.record, cast, monday)
    for role, seat in (("chief", Role.PARTY_CHIEF), ("digger", Role.CONTRACTOR)):
        give_seat(
            record=story.record,
            person=cast.people[role],
            roles=[seat],
            by=cast.by("manager"),
            at=story.at(0, "08:00"),
        )
    _plan(story)
    _stake(story)
    return story


def _rows() -> list[dict[str, str]]:
    """Offset stakes each 20 m, 4 m left and right of the centreline, two stages."""
    line = alignment_through(POINTS, [Bend(radius_m=60.0)], start_m=1000.0)
    table = stationing(1000.0, [EQUATION], start_m=1000.0)
    rows = []
    for along in range(1000, int(line.end_m), 20):
        station = stations_at(table, [float(along)])
        value, region = float(station.station_m[0]), int(station.region[0])
        text = f"{int(value // 1000)}+{value % 1000:06.2f}"
        text += " ahead" if region else ""
        for offset, side in ((-4.0, "LT"), (4.0, "RT")):
            at = place(line, [float(along)], [offset]).points[0]
            for stage in ("clearing", "subgrade"):
                rows.append(
                    {
                        "label": f"{along - 1000:03d}{side}-{stage[:1].upper()}",
                        "northing": f"{at[1]:.3f}",
                        "easting": f"{at[0]:.3f}",
                        "line": f"centreline {text} {side} 4.0",
                        "stage": stage,
                        "sort": "offset stake",
                        "carries": "position",
                        "offset": "4.0",
                    }
                )
    return rows


def _plan(story: Story) -> None:
    cast, record = story.cast, story.record
    control = [
        {
            "label": label,
            "purpose": "control",
            "northing": n,
            "easting": e,
            "elevation": z,
            "carries": "both",
        }
        for label, n, e, z in (
            ("R1", "990.000", "1995.000", "12.410"),
            ("R2", "1075.000", "2085.000", "13.025"),
            ("R3", "1035.000", "2215.000", "12.870"),
        )
    ]
    draft = plan_marks(
        record=record, rows=control, title="Road control", by=cast.by("chief")
    )
    check_plan(
        record=record, draft=draft.key, by=cast.by("surveyor"), how="traverse sheet"
    )
    issue_plan(
        record=record,
        draft=draft.key,
        by=cast.by("surveyor"),
        adopt=Adoption("firm's traverse, closed 1:14 000", "", 3.0, 3.0),
        at=story.at(1, "10:00"),
    )
    draft = plan_marks(
        record=record, rows=_rows(), title="Road stakes", by=cast.by("chief")
    )
    check_plan(
        record=record, draft=draft.key, by=cast.by("surveyor"), how="spacing 20 m"
    )
    issue_plan(
        record=record, draft=draft.key, by=cast.by("surveyor"), at=story.at(2, "10:00")
    )
    draw_zone(
        record=record,
        name="centreline",
        sort="line",
        closed=False,
        corners=[
            Corner(easting=story.off(e), northing=story.off(n)) for e, n in POINTS
        ],
        by=cast.by("chief"),
        at=story.at(2, "11:00"),
    )


def _stake(story: Story) -> None:
    cast, record = story.cast, story.record
    record_locate(
        record=record,
        number="L-90417",
        whose="one-call centre, asked by the earthworks contractor",
        area="both sides of the lane",
        valid_from=story.at(2, "07:00"),
        valid_to=story.at(40, "17:00"),
        private_lines="none there",
        private_by="earthworks contractor",
        by=cast.by("chief"),
        at=story.at(3, "07:00"),
    )
    setup = open_setup(
        record=record,
        sort="total station on a mark",
        used=[Use(story.mark("R1"), "occupied"), Use(story.mark("R2"), "oriented on")],
        checks=[
            CheckMade(
                mark=story.mark("R3"),
                quantity="distance",
                measured=story.between("R1", "R3", "0.003"),
            )
        ],
        serial="7741",
        passage=Passage(done=True),
        by=cast.by("chief"),
        at=story.at(9, "08:00"),
        key=uuid.uuid4(),
    )
    labels = [row["label"] for row in _rows() if row["stage"] == "clearing"]
    for number, label in enumerate(labels):
        set_stake(
            record=record,
            mark=story.mark(label),
            setup=setup,
            holds="lath",
            passage=Passage(done=True),
            by=cast.by("chief"),
            at=story.at(
                9, f"{8 + math.floor(number / 12):02d}:{5 + number % 12 * 4:02d}"
            ),
        )
    retire_marks(
        record=record,
        stage="clearing",
        reason="clearing is done",
        by=cast.by("manager"),
        at=story.at(30, "12:00"),
    )
