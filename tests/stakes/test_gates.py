"""What passed a gate is held until the surveyor accepts it or a check passes."""

from __future__ import annotations

import pytest

from stakes.actions.checking import Asked, check_stakes
from stakes.actions.gates import accept_gate
from stakes.actions.passing import Gated, Passage
from stakes.actions.setting import set_stake
from stakes.queries.gates import SettingAsked, for_setting
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import CHIEF, SURVEYOR, after, measured
from tests.fieldwork import field_job, locate, station

pytestmark = pytest.mark.django_db


@pytest.fixture
def held():
    """101 and 102 set with no setup, authorised by telephone."""
    record, marks = field_job()
    locate(record)
    for label in ("101", "102"):
        set_stake(
            record=record,
            mark=marks[label],
            passage=Passage("Surveyor", "by telephone"),
            by=CHIEF,
            at=after(5),
        )
    return record, marks


def is_held(held, label: str) -> bool:
    record, marks = held
    return job_state(record).marks[marks[label]].held_back


def test_the_surveyor_accepts_with_a_reason(held) -> None:
    record, marks = held
    assert is_held(held, "101")
    accept_gate(
        record=record, marks=[marks["101"]], reason="tied in later", by=SURVEYOR
    )
    assert not is_held(held, "101")
    assert is_held(held, "102")


def test_an_independent_passing_check_lets_them_go(held) -> None:
    record, marks = held
    check_stakes(
        record=record,
        sort="distance",
        marks=[marks["101"], marks["102"]],
        asked=Asked(measured=measured("40.00")),
        method="tape",
        by=CHIEF,
        at=after(60),
    )
    assert not is_held(held, "101")


def test_an_acceptance_without_reason_or_of_what_is_not_held_is_refused(held) -> None:
    record, marks = held
    with pytest.raises(Refused, match="says why"):
        accept_gate(record=record, marks=[marks["101"]], reason=" ", by=SURVEYOR)
    with pytest.raises(Refused, match="103 is not held"):
        accept_gate(record=record, marks=[marks["103"]], reason="x", by=SURVEYOR)
    with pytest.raises(Refused, match="No stake"):
        accept_gate(record=record, marks=[], reason="x", by=SURVEYOR)


def test_satellite_heights_are_stopped_only_where_they_matter() -> None:
    record, marks = field_job()
    view = job_state(record).marks[marks["101"]]
    setup = station(record, marks)
    from stakes.models import Setup

    row = Setup.objects.get(key=setup)
    row.sort = "satellite"

    def names(sort: str) -> list[str]:
        view.plan.sort = sort
        asked = SettingAsked(view, after(5), row, breaks_ground=False)
        return [gate.name for gate in for_setting(asked)]

    assert names("anchor rod") == ["height by satellite"]
    assert names("clearing limit") == []


def test_a_stake_set_after_its_setup_was_closed_is_stopped() -> None:
    from stakes.actions.setups import close_setup

    record, marks = field_job()
    setup = station(record, marks)
    close_setup(record=record, setup=setup, by=CHIEF, at=after(30))
    given = {
        "record": record,
        "mark": marks["101"],
        "setup": setup,
        "holds": "paint mark",
        "by": CHIEF,
    }
    with pytest.raises(Gated, match="setup closed"):
        set_stake(**given, at=after(40))
    set_stake(**given, at=after(20))
