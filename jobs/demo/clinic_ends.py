"""The clinic's last weeks: a revision, paper keyed late, a match, what is open today."""

from __future__ import annotations

from uuid import UUID

from jobs.actions import handovers, requests, visits
from jobs.demo.clinic_story import DONE, leave, station, task, visit
from jobs.demo.telling import Story
from stakes.actions.condition import report_gone
from stakes.actions.issuing import check_plan, issue_plan, plan_marks
from stakes.actions.setting import set_stake
from stakes.actions.sheets import read_sheet, receive_sheet
from stakes.kinds.condition import MarksSeen
from stakes.record import Known, Said, append


def plan_more(story: Story, sheet: UUID) -> None:
    """Stakes along the haul road, two for the slab, gridline 2."""
    rows = [
        {
            "label": f"H{n}",
            "northing": "988",
            "easting": str(4980 + n * 20),
            "elevation": "409.5",
            "sort": "trench line",
            "line": "storm drain",
            "stage": "trench",
            "refers_to": "invert",
            "carries": "both",
        }
        for n in range(1, 12)
    ]
    for label, n, e in (("S1", "1045", "5075"), ("S2", "1090", "5075")):
        rows.append({"label": label, "northing": n, "easting": e, "stage": "slab"})
    for label, n in (("G2N", "1125"), ("G2S", "1000")):
        rows.append(
            {"label": label, "northing": n, "easting": "5100", "line": "grid 2"}
        )
    _issue(story, rows, "Trench, slab and gridline stakes", [sheet], 4)


def _issue(
    story: Story, rows: list[dict[str, str]], title: str, basis: list[UUID], day: int
) -> None:
    cast, record = story.cast, story.record
    draft = plan_marks(
        record=record,
        rows=[{"carries": "position", **row} for row in rows],
        title=title,
        basis=basis,
        by=cast.by("chief"),
    )
    check_plan(
        record=record,
        draft=draft.key,
        by=cast.by("surveyor"),
        how="compared with the sheet, spacing looked at",
    )
    issue_plan(
        record=record,
        draft=draft.key,
        by=cast.by("surveyor"),
        at=story.at(day, "13:00"),
    )


def set_trench(story: Story) -> None:
    """Visit 5 before the loss: the trench and gridline stakes, by the satellite crew's
    day on site and the firm's total station."""
    labels = [f"H{n}" for n in range(1, 12)] + ["G2N", "G2S"]
    tasks = [task("set", "storm drain and grid 2", story.marks(*labels))]
    key = visit(story, 21, tasks)
    setup = station(story, "CP4", "CP3", "CP1", 21, "08:00", key)
    for number, label in enumerate(labels):
        set_stake(
            record=story.record,
            mark=story.mark(label),
            setup=setup,
            holds="hub and tack",
            passage=DONE,
            occasion=key,
            by=story.cast.by("chief"),
            at=story.at(21, f"{8 + number // 7:02d}:{10 + number % 7 * 7:02d}"),
        )
    handovers.hand_over(
        record=story.record,
        company=story.cast.earthworks,
        listed=story.marks(*labels),
        signature="declined",
        to_whom="Foreman of the earthworks",
        words="nobody told me about the storm drain",
        visit=key,
        in_spite=True,
        by=story.cast.by("chief"),
        at=story.at(21, "14:00"),
    )
    leave(story, key, 21, "done", tasks)


def revise(story: Story, old: UUID) -> None:
    """A newer sheet moves grid 2 by 0.50 ft; the old hubs stand beside the new."""
    cast, record = story.cast, story.record
    sheet = receive_sheet(
        record=record,
        number="A-101",
        revision="3",
        status="for construction",
        title="Foundation plan",
        from_whom="architect",
        replaces=old,
        what_changed="grid 2 moves 0.50 ft east",
        touched=story.marks("G2N", "G2S"),
        by=cast.by("manager"),
        at=story.at(40, "09:00"),
    )
    read_sheet(
        record=record,
        sheet=sheet,
        sorted_to=story.marks("G2N", "G2S"),
        by=cast.by("surveyor"),
        at=story.at(40, "10:00"),
    )
    rows = [
        {"label": label, "northing": n, "easting": "5100.50", "line": "grid 2"}
        for label, n in (("G2N", "1125"), ("G2S", "1000"))
    ]
    _issue(story, rows, "Grid 2 by revision 3", [sheet], 40)
    tasks = [task("set", "grid 2 by revision 3", story.marks("G2N", "G2S"))]
    key = visit(story, 45, tasks)
    setup = station(story, "CP1", "CP2", "CP5", 45, "08:00", key)
    set_stake(
        record=record,
        mark=story.mark("G2N"),
        setup=setup,
        holds="hub and tack",
        old="left and voided",
        passage=DONE,
        occasion=key,
        by=cast.by("chief"),
        at=story.at(45, "08:30"),
    )
    set_stake(
        record=record,
        mark=story.mark("G2S"),
        setup=setup,
        holds="hub and tack",
        old="pulled",
        match="the surveyor chose to match the footing in place, 0.04 ft east",
        passage=DONE,
        occasion=key,
        by=cast.by("chief"),
        at=story.at(45, "09:00"),
    )
    leave(story, key, 45, "done", tasks)


def paper(story: Story) -> None:
    """A sheet written in the rain, keyed three weeks later."""
    said = Said(
        fact=MarksSeen(listed=tuple(story.marks("H1", "H2")), condition="undisturbed"),
        at=story.at(30, "15:40"),
        known=Known.PAPER,
    )
    append(story.record, said, by=story.cast.by("rod"))


def leave_open(story: Story, labels: list[str]) -> None:
    """What waits today: lost stakes, a request to decide, a setup left open, a visit."""
    cast, record = story.cast, story.record
    report_gone(
        record=record,
        marks=story.marks(labels[5], labels[6]),
        cause="not known",
        last_seen=story.at(50, "17:00"),
        by=cast.by("superintendent"),
        at=story.at(52, "07:00"),
    )
    requests.make_request(
        record=record,
        company=cast.builder,
        sort="re-stake",
        listed=story.marks(labels[5], labels[6]),
        words="Two corners are gone, the forms go up on Thursday.",
        built_from="",
        last_seen="Wednesday evening",
        cause="third party or not known",
        site_ready="yes",
        by=cast.by("superintendent"),
        at=story.at(52, "07:15"),
    )
    tasks = [task("put back", "the two corners", story.marks(labels[5], labels[6]))]
    key = visits.plan_visit(
        record=record,
        crew="Crew 1",
        starts_at=story.at(57, "08:00"),
        tasks=tasks,
        by=cast.by("manager"),
        at=story.at(53, "10:00"),
    )
    station(story, "CP1", "CP2", "CP5", 54, "08:00", key)
