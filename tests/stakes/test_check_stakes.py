"""Checks: judged against the record, graded by what they do not share."""

from __future__ import annotations

import uuid
from decimal import Decimal

import pytest

from stakes.actions.checking import Asked, check_stakes
from stakes.actions.setting import set_stake
from stakes.actions.setups import Use
from stakes.kinds.checking import StakeChecked
from stakes.models import Check
from stakes.queries.setup_checks import CheckMade
from stakes.queries.state import job_state
from stakes.queries.taping import Taped
from stakes.record import By, Refused, entries
from tests.builders import CHIEF, after, measured
from tests.fieldwork import field_job, locate, station

pytestmark = pytest.mark.django_db

OTHER = By(person="rod-person", name="Rod person")


@pytest.fixture
def job():
    """Four corners set from CP1 oriented on CP2, hubs at 499.57."""
    record, marks = field_job()
    locate(record)
    setup = station(record, marks, at=after(1))
    for number, label in enumerate(("101", "102", "103", "104")):
        set_stake(
            record=record,
            mark=marks[label],
            setup=setup,
            elevation=measured("499.57"),
            by=CHIEF,
            at=after(10 + number),
        )
    return record, marks, setup


def check(job, sort: str, labels: str, asked: Asked, **more) -> StakeChecked:
    record, marks, _ = job
    given = {"by": CHIEF, "at": after(60), **more}
    key = check_stakes(
        record=record,
        sort=sort,  # type: ignore[arg-type]
        marks=[marks[label] for label in labels.split()],
        asked=asked,
        **given,
    )
    [found] = [
        c.fact
        for c in entries(record, kinds=["checked"])
        if c.fact.check == key  # type: ignore[attr-defined]
    ]
    assert isinstance(found, StakeChecked)
    return found


def trust(job, label: str):
    return job_state(job[0]).marks[job[1][label]]


def elsewhere(job, at: float = 50):
    """A setup on CP3 and CP4, which nothing was set from."""
    record, marks, _ = job
    return station(
        record,
        marks,
        at=after(at),
        used=[Use(marks["CP3"], "occupied"), Use(marks["CP4"], "oriented on")],
        checks=[
            CheckMade(marks["CP2"], "distance", measured("200.00")),
            CheckMade(marks["BM1"], "elevation", measured("500.00")),
        ],
    )


def test_a_taped_diagonal_sees_shape_and_checks_both_ends(job) -> None:
    """40 by 60 ft: 72.1110 ft."""
    found = check(
        job, "diagonal", "101 103", Asked(measured=measured("72.115")), method="tape"
    )
    assert found.judgement.computed.text == "72.1110"
    assert found.judgement.verdict == "pass"
    assert found.reaches == ("shape",)
    assert found.grade == 2  # another method
    for label in ("101", "103"):
        assert trust(job, label).position.trust == "checked"
        assert trust(job, label).elevation.trust == "not checked"


def test_a_failed_check_puts_both_stakes_and_their_setup_in_question(job) -> None:
    found = check(
        job, "distance", "101 102", Asked(measured=measured("40.21")), method="tape"
    )
    assert found.judgement.verdict == "fail"
    assert found.judgement.difference.text == "0.2100"
    assert trust(job, "101").position.trust == "in question"
    assert trust(job, "103").position.trust == "in question"  # same setup


def test_a_check_from_the_same_setup_is_worth_nothing(job) -> None:
    shot = Asked(northing=measured("1080.00"), easting=measured("2080.00"))
    found = check(job, "position", "101", shot, setup=job[2])
    assert (found.grade, found.reaches) == (0, ())
    assert trust(job, "101").position.trust == "not checked"


def test_a_position_from_other_control_sees_place(job) -> None:
    shot = Asked(northing=measured("1080.005"), easting=measured("2079.99"))
    found = check(job, "position", "101", shot, setup=elsewhere(job))
    assert (found.grade, found.reaches) == (2, ("place",))
    assert found.judgement.difference.text == "0.0112"
    assert found.judgement.uncertainty is not None
    assert "off the design: north 0.0050, east -0.0100" in found.corrections[0]


def test_another_person_on_other_control_makes_the_highest_grade(job) -> None:
    shot = Asked(northing=measured("1080.005"), easting=measured("2079.99"))
    found = check(job, "position", "101", shot, setup=elsewhere(job), by=OTHER)
    assert found.grade == 3
    assert "person" not in found.shared


def test_an_elevation_is_held_against_the_hub_as_it_was_set(job) -> None:
    found = check(
        job,
        "elevation",
        "101",
        Asked(measured=measured("499.575")),
        setup=elsewhere(job),
    )
    assert found.judgement.computed.text == "499.5700"
    assert (found.components, found.reaches) == ("e", ("height",))
    assert trust(job, "101").elevation.trust == "checked"
    assert trust(job, "101").position.trust == "not checked"


def test_an_angle_is_judged_across_at_the_stake(job) -> None:
    """At 101 from 102 to 104 the corner is square; 60 ft at 30 seconds is 0.0087 ft."""
    found = check(
        job, "angle", "101 102 104", Asked(angle="90-00-30"), method="total station"
    )
    assert found.judgement.difference.text == "0.0087"
    assert found.judgement.verdict == "pass"
    assert len(found.listed) == 3


def test_a_line_is_judged_by_the_offset_from_it(job) -> None:
    record, marks, _ = job
    from tests.builders import plan, row

    [middle] = plan(record, row("105", "1100.00", "2080.03"), at=after(2))
    marks["105"] = middle
    set_stake(
        record=record,
        mark=middle,
        holds="lath only",
        setup=job[2],
        elevation=None,
        by=CHIEF,
        at=after(20),
        carries="position",
    )
    found = check(
        job, "line", "105 101 102", Asked(measured=measured("0.035")), method="string"
    )
    assert found.judgement.computed.text == "0.0300"
    assert found.judgement.verdict == "pass"


def test_a_fit_is_held_against_what_the_sheet_says(job) -> None:
    asked = Asked(measured=measured("25.01"), by_sheet=measured("25.00"))
    found = check(
        job, "fit", "101", asked, method="tape", against="curb face, sheet C-3"
    )
    assert found.reaches == ("fit",)
    assert found.judgement.verdict == "pass"
    with pytest.raises(Refused, match="says against what"):
        check(job, "fit", "101", asked, method="tape")


def test_a_slope_length_is_reduced_and_the_correction_said(job) -> None:
    """A rise of 3 ft in 40.1124 ft of slope is 40 ft level."""
    found = check(
        job,
        "distance",
        "101 102",
        Asked(measured=measured("40.112"), taped=Taped(rise=measured("3.00"))),
        method="tape",
    )
    assert found.corrections == ("slope -0.1123 ft",)
    assert found.judgement.verdict == "pass"


def test_temperature_pull_and_sag_of_a_tape_are_corrected_and_said(job) -> None:
    """60 ft at 95 °F: 6.45e-6 x 27 x 60 = +0.0104 ft (Ghilani & Wolf, from memory)."""
    taped = Taped(temperature=Decimal(95), pull=Decimal(20), hung=True)
    asked = Asked(measured=measured("60.00"), taped=taped)
    found = check(job, "distance", "102 103", asked, method="tape")
    words = {w.rsplit(" ", 2)[0]: w.split()[-2] for w in found.corrections}
    assert words["temperature 95 °F"] == "+0.0104"
    assert float(words["pull 20 lb"]) == pytest.approx(0.0039, abs=2e-4)
    # -w² L³ / 24 P²: 0.2354² x 18.288³ / (24 x 88.96²) m, from memory
    assert float(words["sag"]) == pytest.approx(-0.00585, abs=2e-4)
    weak = Taped(pull=Decimal(1), hung=True)
    with pytest.raises(Refused, match="too weak"):
        check(
            job,
            "distance",
            "102 103",
            Asked(measured=measured("300"), taped=weak),
            method="tape",
        )


def test_control_among_the_marks_is_what_a_stake_is_judged_from(job) -> None:
    """CP3 to 103: 80 ft by 60 ft, 100 ft."""
    found = check(
        job, "distance", "CP3 103", Asked(measured=measured("100.005")), method="tape"
    )
    assert [str(m) for m in found.listed] == [str(job[1]["103"])]
    assert found.reaches == ("place",)
    assert found.grade == 2


def test_a_mark_a_setup_leans_on_is_not_checked_by_that_setup(job) -> None:
    shot = Asked(northing=measured("1200"), easting=measured("2000"))
    found = check(job, "position", "CP2", shot, setup=job[2])
    assert found.grade == 0


@pytest.mark.parametrize(
    ("sort", "labels", "asked", "sentence"),
    [
        ("distance", "101 102", Asked(), "does not say what was measured"),
        ("distance", "101", Asked(measured=measured("1")), "names one end and"),
        ("distance", "101 101", Asked(measured=measured("1")), "named twice"),
        ("position", "101", Asked(northing=measured("1")), "the easting measured"),
        ("angle", "101 102 104", Asked(angle="90.3020"), "90.3020"),
        ("angle", "101 102 104", Asked(), "angle"),
        (
            "distance",
            "101 102",
            Asked(measured=measured("3"), taped=Taped(rise=measured("4"))),
            "differ more in height",
        ),
        ("fit", "101", Asked(measured=measured("1")), "what the sheet says"),
        ("distance", "101 102", Asked(measured=measured("-40")), "above zero"),
    ],
)
def test_what_is_missing_or_odd_is_refused_with_a_sentence(
    job, sort, labels, asked, sentence
) -> None:
    with pytest.raises(Refused, match=sentence):
        check(job, sort, labels, asked, against="curb")
    assert not Check.objects.exists()


def test_a_double_tap_makes_one_check(job) -> None:
    key = uuid.uuid4()
    asked = Asked(measured=measured("72.115"))
    one = check(job, "diagonal", "101 103", asked, method="tape", key=key)
    two = check(job, "diagonal", "101 103", asked, method="tape", key=key)
    assert one.check == two.check
    assert Check.objects.count() == 1
