"""Setting a stake by its form: gates, labels, odd input, double taps."""

from __future__ import annotations

import uuid

import pytest
from django.utils import timezone

from stakes.actions.setups import close_setup
from stakes.kinds.setting import StakeSet
from stakes.models import Stake
from stakes.record import entries
from tests.builders import CHIEF
from tests.fieldwork import station
from tests.jobs.cast import Cast
from tests.pages.crew import Field, setup_of, text


def test_a_stake_is_set_from_the_open_setup_and_its_label_shown(ready: Field) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    assert ready.get(tail).status_code == 200
    done = ready.post(
        tail,
        setup=setup_of(ready),
        holds="hub and tack",
        elevation="499.57",
        off_north="0.01",
        off_north_side="south",
        off_east="0.005",
        off_east_side="east",
    )
    assert done.status_code == 303, text(done)
    page = text(ready.client.get(done.url))
    assert "C 1.07 ft to top of footing" in page
    assert "LEVEL toward wall line A" in page
    assert "0.010 south, 0.005 east" in page
    fact = entries(ready.record, kinds=["set"])[-1].fact
    assert isinstance(fact, StakeSet)
    assert (fact.off_north.text, fact.northing.text) == ("-0.01", "1079.99")


def test_no_stake_is_driven_without_a_locate_and_the_page_says_what_to_do(
    field: Field,
) -> None:
    station(field.record, field.marks, at=timezone.now())
    tail = f"marks/{field.marks['101']}/set/"
    page = text(field.get(tail))
    assert "No valid utility locate" in page
    assert "1926.651(b)" in page
    assert "competent person on site" in page
    assert "Go on, and have it held" not in page  # the one hard stop
    stopped = field.post(
        tail, setup=setup_of(field), holds="hub and tack", authorised_by="S", how="x"
    )
    assert stopped.status_code == 409
    assert not Stake.objects.filter(set_number__isnull=False).exists()


def test_a_mark_may_be_painted_without_a_locate(field: Field) -> None:
    station(field.record, field.marks, at=timezone.now())
    tail = f"marks/{field.marks['101']}/set/"
    assert "paint mark" in text(field.get(tail, surface="1"))
    done = field.post(tail, setup=setup_of(field), holds="paint mark", surface="True")
    assert done.status_code == 303


def test_what_was_done_already_is_recorded_past_the_hard_stop_and_held(
    field: Field,
) -> None:
    tail = f"marks/{field.marks['101']}/set/"
    asked = field.post(tail, gate_answer="yes", done_already="on")
    assert "It will be held" in text(asked)
    assert 'name="done_already" value="on"' in text(asked) or (
        'name="done_already" value="True"' in text(asked)
    )
    done = field.post(tail, holds="hub and tack", setup="", done_already="True")
    assert done.status_code == 303
    assert field.stake("101").held


def test_a_party_chief_goes_on_held_naming_who_and_how(field: Field) -> None:
    tail = f"marks/{field.marks['101']}/set/"
    stopped = field.post(tail, holds="paint mark", setup="", elevation="499.5")
    assert stopped.status_code == 409
    page = text(stopped)
    assert "No setup" in page
    assert 'name="elevation" value="499.5"' in page  # nothing typed is lost
    back = field.post(tail, holds="paint mark", setup="", elevation="499.5", mend="yes")
    assert back.status_code == 200
    assert 'value="499.5"' in text(back)
    assert field.stake("101") is None
    half = field.post(tail, holds="paint mark", setup="", authorised_by="Surveyor")
    assert half.status_code == 409
    assert "Say both who authorised it and how" in text(half)
    done = field.post(
        tail, holds="paint mark", setup="", authorised_by="Surveyor", how="telephone"
    )
    assert done.status_code == 303
    assert field.stake("101").held
    fact = entries(field.record, kinds=["set"])[-1].fact
    assert fact.authorised_by == "Surveyor, telephone"


def test_a_crew_member_cannot_authorise_themselves(
    field: Field, cast: Cast, signed_in
) -> None:
    field.client = signed_in(cast.crew)
    tail = f"marks/{field.marks['101']}/set/"
    sent = field.post(
        tail, holds="paint mark", setup="", authorised_by="me", how="myself"
    )
    assert sent.status_code == 409
    assert "A party chief may go on" in text(sent)
    done = field.post(tail, holds="paint mark", setup="", done_already="on")
    assert done.status_code == 303


def test_a_double_tap_sets_one_stake_and_back_with_other_numbers_is_told(
    ready: Field,
) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    sent = {
        "key": str(uuid.uuid4()),
        "setup": setup_of(ready),
        "holds": "hub and tack",
        "elevation": "499.57",
    }
    head = ready.head
    assert ready.post(tail, **sent).status_code == 303
    assert ready.post(tail, **sent).status_code == 303
    assert ready.head == head + 1
    changed = ready.post(tail, **{**sent, "elevation": "499.60", "old": "pulled"})
    assert changed.status_code == 422
    assert "sent before, with other words" in text(changed)
    assert ready.head == head + 1


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"elevation": "abc"}, "cannot be read as a length"),
        ({"elevation": "NaN"}, "cannot be read as a length"),
        ({"elevation": "inf"}, "cannot be read as a length"),
        ({"elevation": "1e9"}, "exponent"),
        ({"elevation": "9" * 39}, "larger than any on Earth"),
        ({"elevation": "1,234.5"}, "comma"),
        ({"elevation": "9" * 500}, "at most 40 characters"),
        ({"northing": "1080", "easting": ""}, "Only one of northing and easting"),
        ({"off_north": "5", "off_east": "0"}, "off the design"),
        ({"holds": "other"}, "Say what holds it"),
        ({"holds": "<script>alert(1)</script>"}, "Select a valid choice"),
        ({"setup": "not-a-setup"}, "Select a valid choice"),
        ({"setup": str(uuid.uuid4())}, "Select a valid choice"),
        ({"at": "yesterday"}, "no date and time"),
        ({"at": "2999-01-01T10:00"}, "lies in the future"),
        ({"remark": "x" * 2500}, "at most 2000 characters"),
        ({"key": "not-a-key"}, "valid UUID"),
    ],
)
def test_odd_input_gets_a_sentence_and_the_record_stays(
    ready: Field, sent: dict[str, str], sentence: str
) -> None:
    head = ready.head
    answer = ready.post(
        f"marks/{ready.marks['101']}/set/",
        **{"setup": setup_of(ready), "holds": "hub and tack", **sent},
    )
    assert answer.status_code == 422
    assert sentence in text(answer)
    assert "<script>alert" not in text(answer)
    assert ready.head == head


def test_numbers_far_off_are_asked_about_and_then_kept(ready: Field) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    sent = {
        "setup": setup_of(ready),
        "holds": "hub and tack",
        "off_north": "0.5",
        "off_east": "0",
    }
    assert "These numbers are what was measured" not in text(ready.get(tail))
    asked = ready.post(tail, **sent)
    assert "These numbers are what was measured" in text(asked)
    assert ready.post(tail, **sent, far="on").status_code == 303


def test_paper_is_keyed_in_for_a_setup_that_was_closed_since(ready: Field) -> None:
    setup, now = setup_of(ready), timezone.now()
    tail = f"marks/{ready.marks['101']}/set/"
    close_setup(record=ready.record, setup=uuid.UUID(setup), by=CHIEF, at=now)
    zone = ready.record.time_zone
    earlier = (now - timezone.timedelta(minutes=5)).astimezone(zone)
    sent = {"setup": setup, "holds": "hub and tack"}
    assert "setup closed" in text(ready.post(tail, **sent)).lower()
    done = ready.post(tail, **sent, at=f"{earlier:%Y-%m-%dT%H:%M}")
    assert done.status_code == 303, text(done)
    assert not ready.stake("101").held


def test_a_visit_of_another_job_is_not_named(ready: Field) -> None:
    ready.post(
        f"marks/{ready.marks['101']}/set/",
        setup=setup_of(ready),
        holds="hub and tack",
        visit=str(uuid.uuid4()),
    )
    assert entries(ready.record, kinds=["set"])[-1].fact.occasion is None


def test_an_empty_form_is_taken_as_sent(ready: Field) -> None:
    answer = ready.client.post(ready.url(f"marks/{ready.marks['101']}/set/"))
    assert answer.status_code == 422
