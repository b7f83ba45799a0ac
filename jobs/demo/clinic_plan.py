"""The clinic before the first stake: job, terms, seats, sheets, control, layout."""

from __future__ import annotations

from uuid import UUID

from jobs.actions.open_job import open_job
from jobs.actions.seats import give_seat
from jobs.demo.telling import FOOT, ZONE, Cast, Story, first_monday
from jobs.kinds.terms import NoticeRule
from jobs.rights import Role
from stakes.actions.cautions import record_locate
from stakes.actions.control import adopt_value
from stakes.actions.issuing import Adoption, check_plan, issue_plan, plan_marks
from stakes.actions.layout import draft_layout
from stakes.actions.questions import answer_question, ask_question
from stakes.actions.recovering import Between, recover_control
from stakes.actions.sheets import read_sheet, receive_sheet
from stakes.actions.zones import draw_zone
from stakes.kinds.cautions import UtilityOwner
from stakes.kinds.planning import Corner
from stakes.queries.layout import Asked

CONTROL = (
    ("CP1", "control", "1134.20", "4996.40", "411.32"),
    ("CP2", "control", "1141.75", "5214.10", "411.90"),
    ("CP3", "control", "1003.60", "5221.35", "409.77"),
    ("CP4", "control", "992.10", "4989.85", "409.12"),
    ("CP5", "control", "1152.30", "5102.60", "412.05"),
    ("CP6", "control", "930.40", "5108.20", "408.41"),
    ("BM1", "benchmark", "1066.00", "5231.00", "412.31"),
    ("BM2", "benchmark", "1020.50", "4979.00", "410.64"),
)
FOOTPRINT = (
    ("5050", "1100"),
    ("5150", "1100"),
    ("5150", "1066"),
    ("5100", "1066"),
    ("5100", "1020"),
    ("5050", "1020"),
)
HAUL_ROAD = (("4950", "985"), ("5250", "978"), ("5250", "960"), ("4950", "967"))
PROPERTY = (("4930", "910"), ("5270", "910"), ("5270", "1180"), ("4930", "1180"))


def open_clinic(cast: Cast) -> Story:
    """The job with its terms and seats."""
    monday = first_monday()
    job = open_job(
        number="2614",
        name="Saltmarsh clinic",
        place="North end of the quay road",
        unit=FOOT,
        zone=ZONE,
        frame="local site grid, ground distances",
        notice=NoticeRule(count=2, of="business days"),
        by=cast.by("manager"),
        at=monday,
    )
    story = Story(job.record, cast, monday)
    for role, seat in (
        ("chief", Role.PARTY_CHIEF),
        ("rod", Role.CREW),
        ("superintendent", Role.CONTRACTOR),
        ("mason", Role.CONTRACTOR),
        ("digger", Role.CONTRACTOR),
        ("inspector", Role.INSPECTOR),
        ("auditor", Role.AUDITOR),
        ("satellite", Role.SUBCONTRACTED),
    ):
        give_seat(
            record=story.record,
            person=cast.people[role],
            roles=[seat],
            by=cast.by("manager"),
            at=story.at(0, "07:30"),
        )
    return story


def receive_sheets(story: Story) -> UUID:
    """The first set of sheets, and the question a missing dimension raises."""
    cast, record = story.cast, story.record
    sheet = receive_sheet(
        record=record,
        number="A-101",
        revision="2",
        status="for construction",
        title="Foundation plan",
        from_whom="architect",
        by=cast.by("manager"),
        at=story.at(0, "09:00"),
    )
    read_sheet(
        record=record,
        sheet=sheet,
        changes_nothing=True,
        by=cast.by("surveyor"),
        at=story.at(0, "10:30"),
    )
    question = ask_question(
        record=record,
        words="Grid 3 to the east property line is not dimensioned on A-101.",
        to_whom="architect",
        sheets=[sheet],
        by=cast.by("surveyor"),
        at=story.at(0, "11:00"),
    )
    answer_question(
        record=record,
        question=question,
        words="120.00 ft from grid 3 to the line.",
        by_whom="architect",
        in_writing=True,
        by=cast.by("surveyor"),
        at=story.at(1, "15:20"),
    )
    return sheet


def accept_control(story: Story, sheet: UUID) -> None:
    """Six control marks and two benchmarks that first disagree by 0.10 ft."""
    cast, record = story.cast, story.record
    rows = [
        {
            "label": label,
            "purpose": purpose,
            "carries": "elevation" if purpose == "benchmark" else "both",
            "northing": n,
            "easting": e,
            "elevation": z,
            "sort": "iron rod" if purpose == "control" else "bolt in wall",
            "lasts": "years",
        }
        for label, purpose, n, e, z in CONTROL
    ]
    draft = plan_marks(
        record=record,
        rows=rows,
        title="Control by the owner's surveyor",
        basis=[sheet],
        by=cast.by("chief"),
    )
    check_plan(
        record=record, draft=draft.key, by=cast.by("surveyor"), how="read back twice"
    )
    issue_plan(
        record=record,
        draft=draft.key,
        by=cast.by("surveyor"),
        adopt=Adoption("control sheet S-001", "2026-08-20", 2.0, 2.0),
        at=story.at(1, "16:30"),
    )
    distances = [
        Between(story.mark(a), story.mark(b), story.between(a, b, error))
        for a, b, error in (
            ("CP1", "CP2", "0.01"),
            ("CP2", "CP3", "-0.01"),
            ("CP3", "CP4", "0.01"),
            ("CP4", "CP1", "0.00"),
            ("CP1", "CP3", "0.01"),
            ("CP2", "CP4", "-0.01"),
        )
    ]
    rises = [Between(story.mark("BM1"), story.mark("BM2"), story.long("-1.77"))]
    found = {story.mark(label): "undisturbed" for label, *_ in CONTROL}
    recover_control(
        record=record,
        found=found,
        distances=distances,
        rises=rises,
        by=cast.by("chief"),
        at=story.at(2, "09:40"),
    )
    adopt_value(
        record=record,
        mark=story.mark("BM2"),
        source="levelled twice from BM1; the sheet has 410.64",
        elevation=story.long("410.54"),
        elevation_mm=2.0,
        reason="BM1 agrees with the city bolt, BM2 was set before the wall was raised",
        far_is_meant=True,
        by=cast.by("surveyor"),
        at=story.at(2, "17:10"),
    )


def draw_site(story: Story) -> UUID:
    """Footprint, haul road and property; the footprint's key."""
    by = story.cast.by("chief")

    def zone(name: str, sort: str, corners: tuple[tuple[str, str], ...]) -> UUID:
        return draw_zone(
            record=story.record,
            name=name,
            sort=sort,
            corners=[
                Corner(easting=story.long(e), northing=story.long(n))
                for e, n in corners
            ],
            by=by,
            at=story.at(2, "18:00"),
        )

    zone("property", "property", PROPERTY)
    zone("haul road", "haul road", HAUL_ROAD)
    return zone("clinic", "footprint", FOOTPRINT)


def lay_out(story: Story, footprint: UUID) -> None:
    """Offset stakes for every wall line, outside a ten-foot excavation."""
    cast, record = story.cast, story.record
    asked = Asked(
        footprint=footprint,
        offset=story.long("10"),
        step=story.long("5"),
        depth=story.long("10"),
        work_space=story.long("3"),
        clearance=story.long("2"),
        first_number=101,
    )
    draft = draft_layout(
        record=record,
        asked=asked,
        title="Offset stakes of the clinic",
        stage="dig",
        refers_to="top of footing",
        tolerance="Building corners and gridlines",
        lasts="weeks",
        by=cast.by("chief"),
    )
    check_plan(
        record=record,
        draft=draft.key,
        by=cast.by("surveyor"),
        how="dimension strings added up, overall 100.00 and 80.00",
    )
    issue_plan(
        record=record, draft=draft.key, by=cast.by("surveyor"), at=story.at(3, "12:00")
    )


def locate_lines(story: Story) -> None:
    """The utility locate: valid for the weeks of the story, private lines asked apart."""
    record_locate(
        record=story.record,
        number="L-88213",
        whose="one-call centre, asked by the general contractor",
        area="the whole clinic lot",
        valid_from=story.at(2, "07:00"),
        valid_to=story.at(80, "17:00"),
        owners=[
            UtilityOwner(owner="electric", answer="marked"),
            UtilityOwner(owner="water", answer="clear"),
        ],
        private_lines="marked",
        private_by="general contractor",
        by=story.cast.by("chief"),
        at=story.at(3, "06:50"),
    )
