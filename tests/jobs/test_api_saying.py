"""What programs say goes through the pages' own actions: nothing that follows from a
measurement is taken from outside."""

from __future__ import annotations

import hashlib
import json
import uuid

import pytest
from django.test import Client
from django.utils import timezone

from jobs.actions.visits import plan_visit
from jobs.kinds.visits import PlannedTask
from stakes.actions.photos import path_of
from stakes.models import Check, Entry, Mark, PrivatePart, Setup
from tests.fieldwork import field_job, locate
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

RECORD = "/api/jobs/2614/record/"


@pytest.fixture
def site():
    """A job ready for the field, with a valid locate."""
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    hour_ago = timezone.now() - timezone.timedelta(hours=1)
    record, marks = field_job(job.record, at=hour_ago)
    later = timezone.now() + timezone.timedelta(days=5)
    locate(record, at=hour_ago, valid_to=later)
    return cast, record, marks


def ft(text: str) -> dict[str, str]:
    return {"text": text, "unit": "ft"}


def item(kind: str, facts: dict[str, object], **more: object) -> dict[str, object]:
    return {"key": str(uuid.uuid4()), "kind": kind, "facts": facts, **more}


def say(person, *items: dict[str, object], job: str = "2614") -> list[dict]:
    client = Client()
    client.force_login(person)
    answer = client.post(
        f"/api/jobs/{job}/record/",
        json.dumps({"items": items}),
        content_type="application/json",
    )
    assert answer.status_code == 200, answer.content
    return answer.json()["outcomes"]


def opened(marks, distance: str = "282.84") -> dict[str, object]:
    facts = {
        "sort": "total station on a mark",
        "used": [
            {"mark": str(marks["CP1"]), "role": "occupied"},
            {"mark": str(marks["CP2"]), "role": "oriented on"},
        ],
        "checks": [
            {
                "mark": str(marks["CP3"]),
                "quantity": "distance",
                "measured": ft(distance),
            },
            {
                "mark": str(marks["CP3"]),
                "quantity": "elevation",
                "measured": ft("500.01"),
            },
        ],
        "instrument": "total station",
        "serial": "30417",
    }
    return item("setup opened", facts)


def test_a_stake_is_set_and_checked_with_label_and_verdict_worked_out(site) -> None:
    cast, record, marks = site
    [told] = say(cast.party_chief, opened(marks))
    assert told["outcome"] == "recorded", told
    setup = str(Setup.objects.get(record=record).key)
    set_101, set_102 = (
        item(
            "set",
            {"mark": str(marks[label]), "setup": setup, "elevation": ft("499.00")},
        )
        for label in ("101", "102")
    )
    # Between 101 and 102 are 40.00 ft by their coordinates.
    taped = {
        "sort": "distance",
        "marks": [str(marks["101"]), str(marks["102"])],
        "asked": {"measured": ft("40.01")},
        "method": "tape",
    }
    outcomes = say(cast.crew, set_101, set_102, item("checked", taped))
    assert [o["outcome"] for o in outcomes] == ["recorded"] * 3, outcomes
    body = json.loads(Entry.objects.get(key=set_101["key"]).body)
    assert body["facts"]["cut"]["text"] == "0.50"
    assert Check.objects.get(record=record).verdict == "pass"


def test_a_verdict_or_a_gate_cannot_be_brought_along(site) -> None:
    cast, _, marks = site
    mark = str(marks["101"])
    forged = [
        item("set", {"mark": mark, "gates": []}),
        item("set", {"mark": mark, "passage": {"done": True, "hard": False}}),
        item("checked", {"sort": "position", "marks": [mark], "grade": 3}),
        item("judged again", {"check": mark}),
        item("planned", {"plan": mark, "rows": []}),
    ]
    codes = [told["code"] for told in say(cast.surveyor, *forged)]
    assert codes == ["unreadable"] * 3 + ["unknown kind"] * 2


def test_a_gate_stops_a_program_as_it_stops_a_page(site) -> None:
    cast, _, marks = site
    mark = str(marks["101"])
    told, authorised, done = say(
        cast.crew,
        item("set", {"mark": mark}),
        item("set", {"mark": mark, "passage": {"authorised_by": "me", "how": "x"}}),
        item("set", {"mark": mark, "passage": {"done": True}}),
    )
    assert (told["code"], authorised["code"]) == ("gated", "not yours")
    assert done["outcome"] == "recorded"
    assert Mark.objects.get(key=marks["101"]).stakes_set == 1
    body = json.loads(Entry.objects.get(key=done["key"]).body)
    assert body["facts"]["gates"] and "nobody" in body["facts"]["authorised_by"]


def test_each_kind_takes_its_own_right(site) -> None:
    cast, _, marks = site
    facts = {"mark": str(marks["CP1"]), "source": "A-1", "elevation": ft("500.02")}
    value = item("value adopted", facts | {"reason": "levelled anew"})
    assert say(cast.party_chief, value)[0]["code"] == "not yours"
    assert say(cast.surveyor, value)[0]["outcome"] == "recorded"


@pytest.mark.parametrize(
    ("length", "words"),
    [
        ({"text": "12.5", "unit": "ft", "nm": "1"}, "nanometres"),
        ({"text": "a lot", "unit": "ft"}, "cannot be read"),
        ({"text": "1", "unit": "mile"}, "no unit of length"),
        ({"text": "9" * 30, "unit": "m"}, "cannot be read"),
        (12.5, "cannot be read"),
    ],
)
def test_a_length_is_text_and_unit_and_what_it_comes_to_is_worked_out(
    site, length, words
) -> None:
    cast, _, _ = site
    facts = {"label": "F1", "northing": length, "easting": ft("1")}
    [told] = say(cast.crew, item("foreign mark found", facts))
    assert told["outcome"] == "refused" and words in told["what"]


def test_a_remark_stays_outside_the_hashed_body(site) -> None:
    cast, record, marks = site
    facts = {"listed": [str(marks["101"])], "condition": "leaning", "remark": "by Otto"}
    [told] = say(cast.crew, item("seen", facts, known="copied from paper"))
    entry = Entry.objects.get(record=record, number=told["number"])
    assert "Otto" not in entry.body
    assert entry.known == "copied from paper"
    assert PrivatePart.objects.get(record=record, number=entry.number).text == "by Otto"


def test_a_key_used_on_one_job_makes_nothing_on_another(site) -> None:
    cast, record, _ = site
    other = make_job("2615", by=cast.by)
    seat_everybody(other, cast)
    found = item("foreign mark found", {"label": "F1", "words": "here"})
    assert say(cast.crew, found)[0]["outcome"] == "recorded"
    there = found | {"facts": {"label": "F2", "words": "there"}}
    assert say(cast.crew, there, job="2615")[0]["code"] == "conflict"
    assert Mark.objects.get(label="F1").record == record
    assert not Mark.objects.filter(label="F2").exists()


def test_marks_and_visits_of_another_job_name_nothing_here(site) -> None:
    cast, _, marks = site
    other = make_job("2615", by=cast.by)
    seat_everybody(other, cast)
    visit = plan_visit(
        record=other.record,
        starts_at=timezone.now(),
        tasks=[PlannedTask(task=uuid.uuid4(), sort="other", words="look")],
        by=cast.by,
    )
    seen = {"listed": [str(marks["101"])], "condition": "undisturbed"}
    [there] = say(cast.crew, item("seen", seen), job="2615")
    [here] = say(cast.crew, item("seen", seen | {"occasion": str(visit)}))
    [left] = say(cast.crew, item("crew left", {"visit": str(visit)}))
    assert there["outcome"] == "refused"
    assert (here["code"], left["code"]) == ("no visit", "no visit")


def test_a_photo_is_named_only_when_it_was_sent(site) -> None:
    cast, _, marks = site
    sha256 = hashlib.sha256(uuid.uuid4().bytes).hexdigest()
    seen = {"listed": [str(marks["101"])], "condition": "undisturbed"}
    for wrong in (["../../etc"], [sha256], sha256[:10], [7]):
        [told] = say(cast.crew, item("seen", seen | {"photos": wrong}))
        assert told["code"] == "no photo"
    path_of(sha256).parent.mkdir(parents=True, exist_ok=True)
    path_of(sha256).write_bytes(b"photo of a stake")
    [told] = say(cast.crew, item("seen", seen | {"photos": [sha256]}))
    assert told["outcome"] == "recorded"


def test_an_entry_is_corrected_in_what_was_said_and_not_in_what_follows(site) -> None:
    cast, record, marks = site
    gone = item("destroyed", {"listed": [str(marks["101"])], "cause": "excavation"})
    say(cast.crew, gone)
    right = {"corrects": gone["key"], "why": "misread"}
    told = say(
        cast.crew,
        item("destroyed", {"cause": "traffic"}, **right),
        item("destroyed", {"cause": "frost"}, **right),
        item("seen", {"cause": "frost"}, **right),
        item("destroyed", {"witnessed": True}, **right),
    )
    assert [o.get("code", o["outcome"]) for o in told] == [
        "recorded",
        "already corrected",
        "already corrected",
        "already corrected",
    ]
    after = Entry.objects.get(record=record, number=told[0]["number"])
    assert json.loads(after.body)["facts"]["cause"] == "traffic"
    assert after.corrects is not None
    again = {"corrects": str(after.key), "why": "misread"}
    told = say(
        cast.crew,
        item("seen", {"cause": "frost"}, **again),
        item("destroyed", {"witnessed": True}, **again),
        item("destroyed", {"listed": [str(uuid.uuid4())]}, **again),
    )
    codes = [one["code"] for one in told]
    assert codes == ["other kind", "unreadable", "unknown mark"]


def test_a_fault_in_one_item_stops_no_other(site, monkeypatch) -> None:
    cast, _, marks = site
    from jobs.api import acts

    def broken(*, record: object, by: object, at: object, key: object) -> None:
        raise ZeroDivisionError

    act = acts.acts()["built from"]
    monkeypatch.setitem(acts._ACTS, "built from", acts.Act(act.kind, broken, act.right))
    seen = {"listed": [str(marks["101"])], "condition": "undisturbed"}
    bad, good = say(cast.crew, item("built from", {}), item("seen", seen))
    assert (bad["code"], good["outcome"]) == ("fault", "recorded")
