"""A stake is set: its values, its cut, its label, what became of the one before."""

from __future__ import annotations

import uuid
from datetime import timedelta

import pytest

from geometry.units import Unit
from stakes.actions.cautions import flag_hazard
from stakes.actions.condition import report_gone
from stakes.actions.passing import Gated, Passage
from stakes.actions.setting import AsStaked, set_stake
from stakes.kinds.planning import Corner, ZoneDrawn
from stakes.kinds.setting import StakeSet
from stakes.kinds.sheets import DirectionGiven, QuestionAsked, SheetReceived
from stakes.models import Stake
from stakes.queries.state import job_state
from stakes.record import Refused, append, entries
from tests.builders import CHIEF, SURVEYOR, after, make_record, measured, plan, row
from tests.fieldwork import field_job, locate, station

pytestmark = pytest.mark.django_db


@pytest.fixture
def job():
    record, marks = field_job()
    locate(record)
    return record, marks, station(record, marks, at=after(1))


def put(job, label: str = "101", **more):
    record, marks, setup = job
    given = {"setup": setup, "by": CHIEF, "at": after(10), **more}
    return set_stake(record=record, mark=marks[label], **given)


def said(record) -> StakeSet:
    fact = entries(record, kinds=[StakeSet.KIND])[-1].fact
    assert isinstance(fact, StakeSet)
    return fact


def test_cut_is_hub_less_design_rounded_once_and_labelled(job) -> None:
    put(job, elevation=measured("499.574"))
    fact = said(job[0])
    assert fact.cut.text == "1.07"
    assert fact.cut.nm == str(round(1.074 * 304_800_000))
    assert fact.label.split(" / ") == [
        "101 building corner",
        "5.00 ft o/s to wall line A",
        "C 1.07 ft to top of footing",
        "hub el 499.57",
        "2026-03-02 PC",
    ]
    assert fact.plain == (
        "Measure 5.00 ft (5'-0\") LEVEL toward wall line A, then dig 1.07 ft "
        "(1'-0 7/8\") down from the top of the hub to top of footing."
    )


def test_a_hub_under_the_design_is_a_fill(job) -> None:
    put(job, elevation=measured("498.195"))
    fact = said(job[0])
    assert fact.cut.text == "-0.31"  # 0.305 rounds away from zero, once
    assert "F 0.31 ft to top of footing" in fact.label
    assert "fill 0.31 ft (0'-3 5/8\") up" in fact.plain


def test_a_hub_on_grade_says_so_without_digging(job) -> None:
    put(job, elevation=measured("498.502"))
    assert "GRADE = top of footing" in said(job[0]).label
    assert "dig" not in said(job[0]).plain


def test_a_metric_job_labels_to_the_millimetre() -> None:
    record = make_record("9", unit="m")
    [mark] = plan(
        record,
        row(
            "7",
            "10",
            "10",
            northing=measured("10", Unit.METRE),
            easting=measured("10", Unit.METRE),
            elevation=measured("100.000", Unit.METRE),
            refers_to="invert",
        ),
    )
    set_stake(
        record=record,
        mark=mark,
        elevation=measured("101.2346", Unit.METRE),
        passage=Passage(done=True),
        by=CHIEF,
        at=after(3),
    )
    assert "C 1.235 m to invert" in said(record).label
    assert "Dig 1.235 m (1235 mm) down" in said(record).plain


def test_as_staked_values_and_differences_are_worked_out_of_each_other(job) -> None:
    put(job, staked=AsStaked(measured("1080.01"), measured("2079.995")))
    fact = said(job[0])
    assert (fact.off_north.text, fact.off_east.text) == ("0.01", "-0.005")
    put(
        job,
        "102",
        staked=AsStaked(off_north=measured("-0.01"), off_east=measured("0.01")),
    )
    fact = said(job[0])
    assert (fact.northing.text, fact.easting.text) == ("1119.99", "2080.01")


def test_one_of_two_coordinates_or_both_ways_at_once_is_refused(job) -> None:
    with pytest.raises(Refused, match="Only one of northing and easting"):
        put(job, staked=AsStaked(northing=measured("1080.00")))
    with pytest.raises(Refused, match="Both the northing and its difference"):
        put(job, staked=AsStaked(measured("1080"), None, measured("0"), measured("0")))


def test_numbers_beyond_the_tolerance_are_asked_about_once_and_then_kept(job) -> None:
    far = AsStaked(measured("1080.52"), measured("2080.00"))
    with pytest.raises(Refused, match=r"0.520 ft off the design.*allows 0.02 ft"):
        put(job, staked=far)
    put(job, staked=far, far=True)
    assert said(job[0]).off_north.text == "0.52"


def test_a_second_stake_says_what_became_of_the_first(job) -> None:
    put(job)
    with pytest.raises(Refused, match="has a stake already"):
        put(job, at=after(20))
    put(job, at=after(20), old="left and voided")
    record, marks, _ = job
    assert job_state(record).marks[marks["101"]].state.doubled
    assert Stake.objects.filter(mark=marks["101"]).count() == 2


def test_a_stake_after_one_that_is_gone_needs_no_question(job) -> None:
    put(job)
    record, marks, _ = job
    report_gone(record=record, marks=[marks["101"]], by=CHIEF, at=after(15))
    put(job, at=after(20))
    assert said(record).old == "not found"


def test_no_ground_is_broken_without_a_valid_locate_whoever_authorises_it() -> None:
    record, marks = field_job()
    setup = station(record, marks)
    job = (record, marks, setup)
    with pytest.raises(Gated, match="no valid utility locate"):
        put(job, passage=Passage("Surveyor", "by telephone"))
    put(job, holds="chisel cross")
    with pytest.raises(Gated, match="no locate ticket is recorded"):
        put(job, "102")


@pytest.mark.parametrize(
    ("ticket", "why"),
    [
        ({"owners": []}, "no owner's answer"),
        ({"valid_to": after(5)}, "expired"),
        ({"valid_from": after(500)}, "not valid yet"),
    ],
)
def test_a_ticket_that_does_not_hold_now_opens_nothing(ticket, why) -> None:
    record, marks = field_job()
    locate(record, **ticket)
    with pytest.raises(Gated, match=why):
        put((record, marks, station(record, marks)))


def test_what_was_done_already_is_always_heard_and_held() -> None:
    record, marks = field_job()
    put((record, marks, None), passage=Passage(done=True))
    fact = said(record)
    assert [g.split(":")[0] for g in fact.gates] == [
        "no valid utility locate",
        "no setup",
    ]
    assert fact.authorised_by == "nobody: it was done already"
    assert job_state(record).marks[marks["101"]].held_back


def test_a_question_a_direction_and_a_newer_sheet_stop_only_their_marks(job) -> None:
    record, marks, _ = job
    held, free = marks["101"], marks["102"]
    facts = [
        QuestionAsked(
            question=uuid.uuid4(),
            words="Which gridline?",
            to_whom="Designer",
            holds=(held,),
        ),
        DirectionGiven(
            direction=uuid.uuid4(),
            words="Move it",
            by_whom="Superintendent",
            to_whom="Party chief",
            holds=(held,),
        ),
        SheetReceived(
            sheet=uuid.uuid4(),
            number="S-2",
            revision="C",
            status="for construction",
            touched=(held,),
        ),
    ]
    append(record, facts, by=SURVEYOR, at=after(5))
    with pytest.raises(Gated) as stopped:
        put(job)
    assert [g.name for g in stopped.value.gates] == [
        "question open",
        "verbal direction",
        "newer sheet",
    ]
    put(job, "102")
    assert free in job_state(record).marks


def test_an_unsorted_newer_sheet_that_may_touch_everything_stops_everything(
    job,
) -> None:
    record, _, _ = job
    fact = SheetReceived(
        sheet=uuid.uuid4(),
        number="S-2",
        revision="C",
        status="for construction",
        touches_all=True,
    )
    append(record, fact, by=SURVEYOR, at=after(5))
    with pytest.raises(Gated, match="not sorted to marks yet"):
        put(job)
    put(job, at=after(4))  # it had not come yet


def test_a_setup_in_question_stops_and_one_that_passed_a_gate_holds(job) -> None:
    record, marks, _ = job
    bad = station(record, marks, at=after(2), measured_m="282.5")
    with pytest.raises(Gated, match="opening check failed"):
        put(job, setup=bad)
    loose = station(
        record, marks, at=after(1), checks=[], passage=Passage("Surveyor", "on site")
    )
    put(
        job,
        "103",
        setup=loose,
        at=after(1.5),
        holds="paint mark",
        passage=Passage("Surveyor", "on site"),
    )
    fact = said(record)
    assert any(g.startswith("setup: no opening check") for g in fact.gates)
    assert fact.authorised_by == "Surveyor, on site"


def test_heights_from_one_benchmark_are_stopped(job) -> None:
    record, marks, _ = job
    from stakes.queries.setup_checks import CheckMade

    plane = station(
        record,
        marks,
        at=after(2),
        checks=[CheckMade(marks["CP3"], "distance", measured("282.84"))],
    )
    with pytest.raises(Gated, match="single benchmark for elevation"):
        put(job, setup=plane)


def test_a_mark_beside_an_excavation_is_set_after_its_caution_was_read(job) -> None:
    record, _, _ = job
    corners = [("1085", "2085"), ("1115", "2085"), ("1115", "2135"), ("1085", "2135")]
    zone = ZoneDrawn(
        zone=uuid.uuid4(),
        name="footing",
        sort="excavation",
        corners=tuple(
            Corner(northing=measured(n), easting=measured(e)) for n, e in corners
        ),
        height=measured("-6.0"),
    )
    append(record, zone, by=SURVEYOR, at=after(2))
    with pytest.raises(Refused, match="caution was not ticked as read: excavation"):
        put(job)
    put(job, acknowledged=["excavation edge"])
    kinds = [e.kind for e in record.entries.order_by("-number")[:2]]
    assert kinds == ["caution read", "set"]
    put(job, "102")  # read that day already


def test_a_flagged_hazard_is_said_again_on_another_day(job) -> None:
    record, _, _ = job
    flag_hazard(
        record=record,
        sort="overhead line",
        words="12 kV along the north side",
        by=CHIEF,
        at=after(2),
    )
    put(job, acknowledged=["overhead line"])
    with pytest.raises(Refused, match="overhead line"):
        put(job, "102", at=after(10) + timedelta(days=1))


def test_a_double_tap_sets_one_stake(job) -> None:
    key = uuid.uuid4()
    one = put(job, key=key, elevation=measured("499.5"))
    two = put(job, key=key, elevation=measured("499.5"))
    assert one.number == two.number
    with pytest.raises(Refused, match="other words"):
        put(job, key=key, elevation=measured("499.6"))


def test_a_remark_stays_outside_the_hashed_body(job) -> None:
    record = job[0]
    entry = put(job, remark="ask for Zed at the gate")
    assert "Zed" not in entry.body
    assert record.entries.filter(body__contains="Zed").count() == 0


def test_paper_from_before_the_plan_was_keyed_is_not_refused(job) -> None:
    record = job[0]
    [late] = plan(record, row("201", "1", "1", carries="position"), at=after(300))
    set_stake(
        record=record,
        mark=late,
        passage=Passage(done=True),
        by=CHIEF,
        at=after(200),
    )
    assert job_state(record).marks[late].standing == "standing"
