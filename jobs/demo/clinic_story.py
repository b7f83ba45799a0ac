"""Ten visits to the clinic in eight weeks: what went well, what did not, who said so."""

from __future__ import annotations

import uuid
from uuid import UUID

from jobs.actions import handovers, holds, requests, visits
from jobs.demo.telling import Story
from jobs.kinds.visits import Member, PlannedTask
from jobs.models import Request
from stakes.actions.checking import check_stakes
from stakes.actions.condition import (
    find_foreign_mark,
    note_built_from,
    report_gone,
    see_marks,
)
from stakes.actions.correcting import withdraw
from stakes.actions.passing import Passage
from stakes.actions.putting_back import put_back
from stakes.actions.questions import give_direction
from stakes.actions.retiring import retire_marks
from stakes.actions.setting import AsStaked, set_stake
from stakes.actions.setups import Use, close_setup, open_setup
from stakes.can import Can
from stakes.models import Entry, Mark
from stakes.queries import ways
from stakes.queries.setup_checks import CheckMade
from stakes.queries.stake_checks import Asked
from stakes.queries.state import job_state

DONE = Passage(done=True)


def visit(
    story: Story, day: int, tasks: list[PlannedTask], crew: str = "Crew 1"
) -> UUID:
    """A visit planned by the manager, the crew on site at 07:30."""
    cast = story.cast
    key = visits.plan_visit(
        record=story.record,
        crew=crew,
        members=[
            Member(
                person=str(cast.people["chief"].pk), name="Party chief", duty="chief"
            ),
            Member(person=str(cast.people["rod"].pk), name="Rod person", duty="rod"),
        ],
        starts_at=story.at(day, "07:30"),
        ends_at=story.at(day, "15:30"),
        tasks=tasks,
        by=cast.by("manager"),
        at=story.at(day - 1, "16:00"),
    )
    visits.arrive(
        record=story.record,
        visit=key,
        weather="dry, light wind",
        instruments=["total station 7741: bubble and plummet looked at"],
        told_operators="radio channel 4",
        by=cast.by("chief"),
        at=story.at(day, "07:35"),
    )
    return key


def task(sort: str, words: str, marks: list[UUID] | None = None) -> PlannedTask:
    return PlannedTask(
        task=uuid.uuid4(),
        sort=sort,  # type: ignore[arg-type]
        words=words,
        listed=tuple(marks or ()),
    )


def leave(
    story: Story,
    key: UUID,
    day: int,
    outcome: str,
    tasks: list[PlannedTask],
    **more: str,
) -> None:
    """Every task ended alike, the ticket closed, the site left at 15:20."""
    by = story.cast.by("chief")
    for one in tasks:
        visits.end_task(
            record=story.record,
            visit=key,
            task=one.task,
            outcome=outcome,  # type: ignore[arg-type]
            sent_away_by=more.get("sent_away_by", ""),
            remark=more.get("remark", ""),
            by=by,
            at=story.at(day, "15:00"),
        )
    visits.close_ticket(
        record=story.record,
        visit=key,
        signature=more.get("ticket", "signed"),  # type: ignore[arg-type]
        signed_by="Superintendent" if more.get("ticket", "signed") == "signed" else "",
        company="General contractor",
        by=by,
        at=story.at(day, "15:15"),
    )
    visits.leave(record=story.record, visit=key, by=by, at=story.at(day, "15:20"))


def station(
    story: Story,
    on: str,
    back: str,
    check: str,
    day: int,
    clock: str,
    occasion: UUID,
    error: str = "0.01",
    role: str = "chief",
) -> UUID:
    """A total station on a mark, oriented on another, checked on a third."""
    return open_setup(
        record=story.record,
        sort="total station on a mark",
        used=[Use(story.mark(on), "occupied"), Use(story.mark(back), "oriented on")],
        checks=[
            CheckMade(
                mark=story.mark(check),
                quantity="distance",
                measured=story.between(on, check, error),
            )
        ],
        instrument="total station",
        serial="7741",
        calibrated_on="2026-05-11",
        instrument_height=story.long("5.12"),
        target_height=story.long("5.00"),
        weather="dry",
        passage=DONE,
        occasion=occasion,
        by=story.cast.by(role),
        at=story.at(day, clock),
    )


def close(
    story: Story,
    setup: UUID,
    on: str,
    check: str,
    day: int,
    clock: str,
    error: str = "0",
) -> None:
    close_setup(
        record=story.record,
        setup=setup,
        checks=[
            CheckMade(
                mark=story.mark(check),
                quantity="distance",
                measured=story.between(on, check, error),
            )
        ],
        by=story.cast.by("chief"),
        at=story.at(day, clock),
    )


def stakes_of(story: Story) -> list[str]:
    rows = Mark.objects.filter(record=story.record, purpose="stake", stage="dig")
    return sorted(rows.values_list("label", flat=True), key=int)


def set_all(
    story: Story, labels: list[str], setup: UUID, day: int, hour: int, occasion: UUID
) -> None:
    for number, label in enumerate(labels):
        set_stake(
            record=story.record,
            mark=story.mark(label),
            setup=setup,
            holds="hub and tack",
            staked=AsStaked(
                off_north=story.long(["0.00", "0.01", "-0.01"][number % 3]),
                off_east=story.long(["0.01", "0.00", "0.00"][number % 3]),
            ),
            capped=True,
            passage=DONE,
            occasion=occasion,
            by=story.cast.by("chief"),
            at=story.at(day, f"{hour + number // 6:02d}:{number % 6 * 9:02d}"),
        )


def check_position(
    story: Story,
    label: str,
    setup: UUID,
    day: int,
    clock: str,
    off: tuple[str, str] = ("0.01", "0.00"),
) -> UUID:
    mark = Mark.objects.get(key=story.mark(label))
    north = float(mark.northing_m or 0) + story.long(off[0]).metres
    east = float(mark.easting_m or 0) + story.long(off[1]).metres
    return check_stakes(
        record=story.record,
        sort="position",
        marks=[mark.key],
        asked=Asked(northing=story.off(north, 2), easting=story.off(east, 2)),
        setup=setup,
        by=story.cast.by("chief"),
        at=story.at(day, clock),
    )


def tape(
    story: Story, one: str, other: str, day: int, clock: str, error: str = "0.01"
) -> None:
    check_stakes(
        record=story.record,
        sort="diagonal",
        marks=story.marks(one, other),
        asked=Asked(measured=story.between(one, other, error)),
        method="tape",
        instrument="steel tape 3",
        by=story.cast.by("rod"),
        at=story.at(day, clock),
    )


def first_stakes(story: Story) -> list[str]:
    """Visits 1 and 2: the stakes set from CP1, checked from CP2, handed over."""
    labels = stakes_of(story)
    marks = story.marks(*labels)
    tasks = [task("set", "all offset stakes of the clinic", marks)]
    first = visit(story, 7, tasks)
    setup = station(story, "CP1", "CP2", "CP4", 7, "08:00", first)
    set_all(story, labels, setup, 7, 8, first)
    close(story, setup, "CP1", "CP4", 7, "14:30", "0.01")
    leave(story, first, 7, "done", tasks)
    tasks = [task("check", "every stake from other control, two diagonals", marks)]
    second = visit(story, 8, tasks)
    other = station(story, "CP3", "CP2", "CP5", 8, "08:00", second)
    for number, label in enumerate(labels):
        check_position(
            story, label, other, 8, f"{8 + number // 10:02d}:{10 + number % 10 * 5:02d}"
        )
    tape(story, labels[0], labels[-1], 8, "11:00")
    tape(story, labels[1], labels[len(labels) // 2], 8, "11:20", "-0.01")
    close(story, other, "CP3", "CP5", 8, "14:00")
    handovers.hand_over(
        record=story.record,
        company=story.cast.builder,
        listed=marks,
        signature="signed",
        to_whom="Superintendent",
        explained=["offsets are measured level", "keep machines off the hubs"],
        visit=second,
        in_spite=True,
        by=story.cast.by("chief"),
        at=story.at(8, "14:30"),
    )
    leave(story, second, 8, "done", tasks)
    return labels


def rod_height(story: Story, label: str) -> None:
    """Visit 3: a check that failed was only a rod height left at yesterday's."""
    tasks = [task("check", "two hubs after the rain", story.marks(label))]
    key = visit(story, 14, tasks)
    setup = station(story, "CP3", "CP2", "CP5", 14, "08:20", key)
    check_position(story, label, setup, 14, "08:50", ("0.32", "0.01"))
    wrong = Entry.objects.filter(record=story.record, kind="checked").latest("number")
    check_position(story, label, setup, 14, "09:20")
    withdraw(
        story.record,
        wrong.number,
        why="rod height was left at 6.00 ft; the shot was repeated at 5.00",
        by=story.cast.by("surveyor"),
        rights=frozenset(Can),
    )
    close(story, setup, "CP3", "CP5", 14, "11:00")
    leave(story, key, 14, "done", tasks)


def lath_down(story: Story, labels: list[str]) -> None:
    """Visit 4: a lath down beside a good hub, another hub leaning."""
    tasks = [task("check", "walk the stakes", story.marks(*labels[:4]))]
    key = visit(story, 17, tasks)
    by = story.cast.by("rod")
    see_marks(
        record=story.record,
        marks=story.marks(labels[2]),
        condition="lath down, hub there",
        cause="weather or water",
        occasion=key,
        by=by,
        at=story.at(17, "08:10"),
    )
    see_marks(
        record=story.record,
        marks=story.marks(labels[3]),
        condition="leaning",
        cause="equipment passed",
        occasion=key,
        by=by,
        at=story.at(17, "08:25"),
    )
    see_marks(
        record=story.record,
        marks=story.marks(labels[0], labels[1]),
        condition="undisturbed",
        occasion=key,
        by=by,
        at=story.at(17, "08:40"),
    )
    leave(story, key, 17, "done", tasks)


def eleven_lost(story: Story) -> None:
    """Eleven stakes along the haul road lost at once; two accounts of the cause."""
    lost = [f"H{number}" for number in range(1, 12)]
    report_gone(
        record=story.record,
        marks=story.marks(*lost),
        cause="equipment passed",
        cause_by="general contractor says the earthworks' dozer; they deny it",
        disputed=True,
        last_seen=story.at(24, "16:30"),
        by=story.cast.by("superintendent"),
        at=story.at(25, "06:45"),
    )


def re_stake(story: Story) -> None:
    """Visit 6: the contractor asks for three of them; they go back by a computed way."""
    cast, record = story.cast, story.record
    labels = ["H1", "H2", "H3"]
    ask = requests.make_request(
        record=record,
        company=cast.builder,
        sort="re-stake",
        listed=story.marks(*labels),
        words="We need the first three back before the trench.",
        cause="contractor's operations",
        site_ready="yes, graded to within 0.2",
        phone="555-0105",
        by=cast.by("superintendent"),
        at=story.at(25, "07:10"),
    )
    requests.accept_request(
        record=record,
        ask=ask,
        promised_for=story.at(28, "08:00"),
        payer="contractor",
        payer_reason="re-stake terms: contractor's operations",
        by=cast.by("manager"),
        at=story.at(25, "09:00"),
    )
    requests.answer_cost(
        record=record,
        ask=ask,
        accepted=False,
        words="the earthworks contractor should pay",
        by=cast.by("superintendent"),
        at=story.at(25, "11:00"),
    )
    tasks = [visits.task_for(Request.objects.get(key=ask))]
    key = visit(story, 28, tasks)
    setup = station(story, "CP6", "CP4", "CP3", 28, "08:00", key)
    for number, label in enumerate(labels):
        mark = story.mark(label)
        found = ways.ways_for(job_state(record), mark)
        way = next(w for w in found.ways if w.offered and w.component == "position")
        check = ways.own_check(way)
        put_back(
            record=record,
            mark=mark,
            rank=way.rank,
            reason="nearest control that is not in question",
            setup=setup,
            measured=story.off(check.expected, 2) if check.unit == "m" else None,
            old="not found",
            passage=DONE,
            occasion=key,
            ask=ask,
            by=cast.by("chief"),
            at=story.at(28, f"09:{number * 12:02d}"),
        )
    close(story, setup, "CP6", "CP3", 28, "12:00")
    handover = handovers.hand_over(
        record=record,
        company=cast.builder,
        listed=story.marks(*labels),
        signature="absent",
        left_with="site office",
        ask=ask,
        visit=key,
        in_spite=True,
        by=cast.by("chief"),
        at=story.at(28, "14:00"),
    )
    handovers.answer_handover(
        record=record,
        handover=handover,
        acknowledged=True,
        by=cast.by("superintendent"),
        at=story.at(29, "07:20"),
    )
    leave(story, key, 28, "done", tasks, ticket="absent")


def put_back_by_others(story: Story, label: str) -> None:
    """A footing poured from a stake that somebody else had put back."""
    see_marks(
        record=story.record,
        marks=story.marks(label),
        condition="put back by others",
        cause="another trade's work",
        told_by="rod person saw fresh dirt round the hub",
        by=story.cast.by("rod"),
        at=story.at(31, "08:00"),
    )
    note_built_from(
        record=story.record,
        marks=story.marks(label),
        what="footing F2, poured before the hub was looked at",
        told_by="foreman of the masons",
        by=story.cast.by("mason"),
        at=story.at(31, "10:30"),
    )
    find_foreign_mark(
        record=story.record,
        label="X1",
        words="nail with orange flag beside the footing, set by others",
        northing=story.long("1018.2"),
        easting=story.long("5101.4"),
        by=story.cast.by("rod"),
        at=story.at(31, "08:20"),
    )


def wasted_trip(story: Story) -> None:
    """Visit 7: access blocked by formwork; standing by, sent away, ticket declined."""
    tasks = [task("set", "gridline nails on the slab")]
    key = visit(story, 33, tasks)
    visits.stand_by(
        record=story.record,
        visit=key,
        since=story.at(33, "07:45"),
        until=story.at(33, "09:30"),
        reason="slab covered with formwork, no access",
        by=story.cast.by("chief"),
        at=story.at(33, "09:30"),
    )
    leave(
        story,
        key,
        33,
        "sent away",
        tasks,
        sent_away_by="superintendent",
        remark="come back next week",
        ticket="absent",
    )


def verbal_direction(story: Story, label: str) -> None:
    """A change by word of mouth, held until it is confirmed in writing."""
    give_direction(
        record=story.record,
        words="Move the west wall stake a foot out, we widened the footing.",
        by_whom="superintendent",
        to_whom="party chief",
        holds=story.marks(label),
        by=story.cast.by("chief"),
        at=story.at(36, "13:00"),
    )


def control_hit(story: Story, labels: list[str]) -> None:
    """CP3 was hit; found two visits later, after stakes set from it were poured."""
    record, cast = story.record, story.cast
    tasks = [task("set", "slab stakes", story.marks("S1", "S2"))]
    key = visit(story, 38, tasks)
    setup = station(story, "CP3", "CP2", "CP4", 38, "08:00", key)
    set_all(story, ["S1", "S2"], setup, 38, 8, key)
    close(story, setup, "CP3", "CP4", 38, "12:00")
    leave(story, key, 38, "done", tasks)
    note_built_from(
        record=record,
        marks=story.marks("S1", "S2"),
        what="slab edge",
        told_by="superintendent",
        by=cast.by("superintendent"),
        at=story.at(42, "16:00"),
    )
    retire_marks(
        record=record,
        marks=story.marks("S2"),
        reason="slab poured",
        by=cast.by("manager"),
        at=story.at(43, "09:00"),
    )
    tasks = [task("control", "control before the steel")]
    later = visit(story, 47, tasks)
    other = station(story, "CP1", "CP2", "CP5", 47, "08:00", later)
    check_position(story, "CP3", other, 47, "08:40", ("0.09", "-0.04"))
    close(story, other, "CP1", "CP5", 47, "10:00")
    leave(story, later, 47, "control failed", tasks)
    state = job_state(record)
    doubtful = [
        view.key
        for view in state.marks.values()
        if str(view.trust.trust) in ("in question", "failed")
        and view.stake is not None
        and not view.plan.is_control
        and view.stake.handed_over
    ]
    if doubtful:
        hold = holds.send_hold(
            record=record,
            listed=doubtful,
            reason="CP3 missed its check by 0.10 ft; these stakes rest on it",
            by=cast.by("surveyor"),
            at=story.at(47, "11:00"),
        )
        holds.hear_hold(
            record=record,
            hold=hold,
            how="acknowledged",
            company=str(cast.builder.pk),
            company_name=cast.builder.name,
            by_whom="Superintendent",
            by=cast.by("superintendent"),
            at=story.at(47, "11:25"),
        )
    see_marks(
        record=record,
        marks=story.marks(labels[0]),
        condition="undisturbed",
        by=cast.by("rod"),
        at=story.at(47, "14:00"),
    )
