"""What the office's pages need in both jobs: drafts, a sheet, a question, a zone."""

from __future__ import annotations

import uuid
from typing import Any

from stakes.actions.issuing import plan_marks
from stakes.actions.questions import ask_question, give_direction
from stakes.actions.sheets import receive_sheet
from stakes.actions.zones import draw_zone, read_corners
from stakes.models import Draft, Mark, Record, Zone
from tests.builders import plan, row
from tests.pages.walk import World, example, furnish


@furnish
def office(world: World) -> None:
    by = world.cast.by
    for job in (world.here, world.elsewhere):
        record = job.record
        plan(record, row("OFFICE-CP", "1000", "2000", purpose="control"))
        stake = {"label": "OFFICE-1", "northing": "1050", "easting": "2100"}
        plan_marks(record=record, rows=[stake], title="Office draft", by=by)
        receive_sheet(
            record=record, number="A-1", revision="1", status="preliminary", by=by
        )
        ask_question(record=record, words="No dimension", to_whom="Designer", by=by)
        give_direction(
            record=record, words="Half a foot", by_whom="A", to_whom="B", by=by
        )
        draw_zone(
            record=record,
            name="Office footprint",
            sort="footprint",
            corners=read_corners("1,1\n1,61\n41,61\n41,1", record),
            by=by,
        )


def _draft(world: World, record: Record) -> dict[str, Any]:
    found = Draft.objects.filter(record=record).first()
    return {"draft": found.key if found else uuid.uuid4()}


def _control(world: World, record: Record) -> dict[str, Any]:
    return {"mark": Mark.objects.get(record=record, label="OFFICE-CP").key}


def _footprint(world: World, record: Record) -> dict[str, Any]:
    return {"zone": Zone.objects.get(record=record, name="Office footprint").key}


for name in ("draft", "draft-check", "draft-issue", "draft-leave"):
    example(f"stakes:{name}")(_draft)
for name in ("control-mark", "value-adopt"):
    example(f"stakes:{name}")(_control)
for name in ("zone-change", "zone-remove", "soil-classify"):
    example(f"stakes:{name}")(_footprint)
