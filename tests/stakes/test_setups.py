"""Setups: opened with a check the record judges, re-checked, closed with a check."""

from __future__ import annotations

import uuid

import pytest

from stakes.actions.passing import Gated, Passage
from stakes.actions.setups import Use, close_setup, open_setup, recheck_setup
from stakes.kinds.setups import SetupCheck
from stakes.models import Setup
from stakes.queries.setup_checks import CheckMade, Sight
from stakes.queries.setups import open_setups, opening_of, story
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import CHIEF, after, measured, plan, row
from tests.fieldwork import field_job, station

pytestmark = pytest.mark.django_db


def check_of(record, setup, number: int = 0) -> SetupCheck:
    return opening_of(record, setup).checks[number]


def test_the_record_computes_what_an_opening_check_should_measure() -> None:
    """200 ft by 200 ft: the diagonal is 282.8427 ft."""
    record, marks = field_job()
    made = check_of(record, station(record, marks))
    assert made.computed.text == "282.8427"
    assert made.difference.text == "-0.0027"
    assert made.tolerance.text == "0.01"
    assert made.verdict == "pass"
    assert 0.003 < made.uncertainty.metres < 0.005
    assert "third of the tolerance" in made.reason


def test_a_setup_names_the_values_it_used() -> None:
    record, marks = field_job()
    opened = opening_of(record, station(record, marks))
    values = job_state(record).marks
    assert [u.value for u in opened.used] == [
        values[marks["CP1"]].plan.value,
        values[marks["CP2"]].plan.value,
    ]
    assert opened.serial == "30417"


def test_a_failed_opening_check_puts_the_setup_in_question() -> None:
    record, marks = field_job()
    setup = station(record, marks, measured_m="282.50")
    assert Setup.objects.get(key=setup).opening == "fail"
    assert "opening check failed" in story(job_state(record), setup).doubt


def test_a_check_on_the_mark_oriented_on_opens_nothing() -> None:
    record, marks = field_job()
    back = CheckMade(marks["CP2"], "distance", measured("200.00"))
    with pytest.raises(Gated, match="no opening check"):
        station(record, marks, checks=[back])
    assert not Setup.objects.exists()


def test_control_in_question_stops_a_setup_before_it_is_opened() -> None:
    record, marks = field_job()
    station(record, marks, measured_m="282.50")
    with pytest.raises(Gated, match="control not verified: CP3 is in question"):
        station(
            record,
            marks,
            at=after(5),
            used=[Use(marks["CP3"], "occupied"), Use(marks["CP2"], "oriented on")],
            checks=[CheckMade(marks["CP4"], "distance", measured("200.00"))],
        )


def test_a_setup_opened_past_a_gate_says_which_and_who_authorised_it() -> None:
    record, marks = field_job()
    setup = station(
        record, marks, checks=[], passage=Passage("Surveyor", "by telephone")
    )
    opened = opening_of(record, setup)
    assert opened.gates[0].startswith("no opening check")
    assert opened.authorised_by == "Surveyor, by telephone"


def test_naming_who_without_how_passes_no_gate() -> None:
    record, marks = field_job()
    with pytest.raises(Gated):
        station(record, marks, checks=[], passage=Passage("Surveyor"))


def test_a_direction_is_judged_by_its_length_across_at_the_mark() -> None:
    """From CP2, CP3 lies 45 degrees right at 282.84 ft; 20 seconds are 0.0274 ft."""
    record, marks = field_job()
    setup = station(
        record, marks, checks=[CheckMade(marks["CP3"], "direction", angle="45°00'20\"")]
    )
    made = check_of(record, setup)
    assert made.difference.text == "0.0274"
    assert made.verdict == "fail"
    assert "45°00'00\" expected" in made.remark


def test_a_position_is_judged_by_the_length_of_its_difference() -> None:
    record, marks = field_job()
    shot = CheckMade(
        marks["CP3"],
        "position",
        northing=measured("1200.003"),
        easting=measured("2200.004"),
    )
    made = check_of(record, station(record, marks, checks=[shot]))
    assert made.difference.text == "0.0050"
    assert made.verdict == "pass"


def test_a_level_run_wants_a_second_benchmark_or_to_be_closed() -> None:
    record, marks = field_job()
    used = [Use(marks["BM1"], "benchmark")]
    run = {"record": record, "sort": "level run", "used": used, "by": CHIEF}
    own = CheckMade(marks["BM1"], "elevation", measured("500.00"))
    with pytest.raises(Gated, match="single benchmark"):
        open_setup(**run, at=after(1), checks=[own])
    second = CheckMade(marks["BM2"], "elevation", measured("503.255"))
    setup = open_setup(**run, at=after(2), checks=[second])
    assert check_of(record, setup).verdict == "pass"
    assert check_of(record, setup).components == "e"


def test_a_level_run_closed_on_its_own_benchmark_is_proved_by_its_loop() -> None:
    record, marks = field_job()
    setup = open_setup(
        record=record,
        sort="level run",
        used=[Use(marks["BM1"], "benchmark")],
        closed_run=True,
        passage=Passage("Surveyor", "on site"),
        by=CHIEF,
        at=after(1),
    )
    assert opening_of(record, setup).gates == (
        "no opening check: nothing was measured to a mark it does not lean on",
    )
    loop = CheckMade(marks["BM1"], "elevation", measured("500.004"))
    close_setup(record=record, setup=setup, checks=[loop], by=CHIEF, at=after(30))
    assert Setup.objects.get(key=setup).closing == "pass"


def test_a_free_station_is_computed_from_its_sights() -> None:
    """Standing in the middle of the square: every corner 141.4214 ft away."""
    record, marks = field_job()
    readings = {"CP1": "225-00-00", "CP2": "315-00-00", "CP3": "45-00-00"}
    sights = [
        Sight(marks[name], measured("141.421"), reading)
        for name, reading in readings.items()
    ]
    setup = open_setup(
        record=record,
        sort="free station",
        used=[],
        sights=sights,
        checks=[CheckMade(marks["CP4"], "distance", measured("141.42"))],
        by=CHIEF,
        at=after(1),
    )
    opened = opening_of(record, setup)
    assert float(opened.northing.text) == pytest.approx(1100, abs=0.001)
    assert float(opened.easting.text) == pytest.approx(2100, abs=0.001)
    assert len(opened.residuals) == 3
    assert opened.checks[0].verdict == "pass"


def test_sights_that_do_not_agree_stop_a_free_station() -> None:
    record, marks = field_job()
    sights = [
        Sight(marks["CP1"], measured("141.421"), "225-00-00"),
        Sight(marks["CP3"], measured("141.90"), "45-00-00"),
    ]
    with pytest.raises(Gated, match="sights disagree"):
        open_setup(
            record=record,
            sort="free station",
            used=[],
            sights=sights,
            checks=[
                CheckMade(
                    marks["CP4"],
                    "position",
                    northing=measured("1000"),
                    easting=measured("2200"),
                )
            ],
            by=CHIEF,
            at=after(1),
        )


def test_a_string_is_checked_by_the_offset_of_a_third_mark() -> None:
    record, marks = field_job()
    [middle] = plan(
        record, row("CP5", "1100.00", "2000.02", purpose="control"), at=after(0)
    )
    setup = open_setup(
        record=record,
        sort="string",
        used=[Use(marks["CP1"], "held"), Use(marks["CP2"], "held")],
        checks=[CheckMade(middle, "distance", measured("0.02"))],
        by=CHIEF,
        at=after(1),
    )
    assert check_of(record, setup).computed.text == "0.0200"


def test_a_recheck_renews_the_hour_and_a_closed_setup_takes_no_more() -> None:
    record, marks = field_job()
    setup = station(record, marks)
    [waiting] = open_setups(job_state(record), after(90))
    assert (waiting.minutes, waiting.due) == (90, True)
    again = CheckMade(marks["CP3"], "distance", measured("282.845"))
    recheck_setup(record=record, setup=setup, checks=[again], by=CHIEF, at=after(60))
    [fresh] = open_setups(job_state(record), after(90))
    assert (fresh.minutes, fresh.due) == (30, False)
    close_setup(record=record, setup=setup, checks=[again], by=CHIEF, at=after(120))
    assert not open_setups(job_state(record), after(130))
    with pytest.raises(Refused, match="closed"):
        recheck_setup(record=record, setup=setup, checks=[again], by=CHIEF)


def test_a_failed_recheck_leaves_doubt_since_the_last_passed_one() -> None:
    record, marks = field_job()
    setup = station(record, marks)
    off = CheckMade(marks["CP3"], "distance", measured("282.95"))
    recheck_setup(record=record, setup=setup, checks=[off], by=CHIEF, at=after(60))
    row = Setup.objects.get(key=setup)
    assert row.doubt_from == after(0)
    assert row.reason == "its re-check failed"


def test_a_double_tap_opens_one_setup_and_other_words_are_told_apart() -> None:
    record, marks = field_job()
    key = uuid.uuid4()
    one = station(record, marks, key=key)
    head = record.head
    assert station(record, marks, key=key) == one
    assert record.head == head
    with pytest.raises(Refused, match="sent before, with other words"):
        station(record, marks, key=key, serial="99")
    assert Setup.objects.count() == 1


@pytest.mark.parametrize(
    ("used", "sentence"),
    [
        ([], "needs one mark to stand on"),
        (["CP1"], "needs one mark to be oriented on"),
        (["CP1", "CP1"], "named twice"),
    ],
)
def test_marks_missing_or_doubled_are_refused_with_a_sentence(used, sentence) -> None:
    record, marks = field_job()
    roles = ("occupied", "oriented on")
    named = [Use(marks[m], role) for m, role in zip(used, roles, strict=False)]
    with pytest.raises(Refused, match=sentence):
        station(record, marks, used=named)


def test_a_mark_of_another_job_is_not_known_here() -> None:
    record, marks = field_job()
    stranger = [Use(uuid.uuid4(), "occupied"), Use(marks["CP2"], "oriented on")]
    with pytest.raises(Refused, match="not on this job"):
        station(record, marks, used=stranger)
    with pytest.raises(Refused, match="not on this job"):
        station(
            record, marks, checks=[CheckMade(uuid.uuid4(), "distance", measured("1"))]
        )


def test_a_mark_without_a_position_cannot_be_measured_against() -> None:
    record, marks = field_job()
    [bare] = plan(record, row("CP9", "1", "1", purpose="control"), at=after(0))
    with pytest.raises(Refused, match="does not check by"):
        open_setup(
            record=record,
            sort="level run",
            used=[Use(marks["BM1"], "benchmark")],
            checks=[CheckMade(bare, "distance", measured("1"))],
            by=CHIEF,
        )
    with pytest.raises(Refused, match="no elevation for CP9"):
        open_setup(
            record=record,
            sort="level run",
            used=[Use(marks["BM1"], "benchmark")],
            checks=[CheckMade(bare, "elevation", measured("1"))],
            by=CHIEF,
        )
