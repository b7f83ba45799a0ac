"""The office's pages: typing marks to issuing them, control, sheets, import, layout."""

from __future__ import annotations

import re
import uuid

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client
from django.urls import reverse

from stakes.actions.zones import draw_zone, read_corners
from stakes.exchange.comma import ORDERS
from stakes.models import Draft, Entry, Mark, Question, Record, Sheet, Zone
from tests.builders import SURVEYOR, plan, row
from tests.fieldwork import field_job
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

NEZ = next(iter(ORDERS))
RECTANGLE = "1000, 2000\n1000, 2060\n1040, 2060\n1040, 2000"


class Office:
    """One job, its people, and a way to send forms as one of them."""

    def __init__(self) -> None:
        self.cast: Cast = make_cast()
        job = make_job()
        seat_everybody(job, self.cast)
        self.record: Record = job.record
        self.clients: dict[str, Client] = {}

    def client(self, who: str) -> Client:
        if who not in self.clients:
            client = Client()
            client.force_login(getattr(self.cast, who))
            self.clients[who] = client
        return self.clients[who]

    def url(self, name: str, **kwargs: object) -> str:
        return reverse(name, kwargs={"job": self.record.number, **kwargs})

    def get(self, name: str, who: str = "surveyor", query: str = "", **kwargs) -> str:
        answer = self.client(who).get(self.url(name, **kwargs) + query)
        assert answer.status_code == 200, answer.content.decode()
        return answer.content.decode()

    def send(self, name: str, data: dict, who: str = "surveyor", **kwargs):
        return self.client(who).post(self.url(name, **kwargs), data)

    def refused(self, name: str, data: dict, words: str, **kwargs) -> str:
        """A form that is answered with a sentence, and a record that did not change."""
        before = Entry.objects.count(), Draft.objects.count()
        answer = self.send(name, data, **kwargs)
        page = answer.content.decode()
        assert answer.status_code == 422, page
        assert words in page
        assert (Entry.objects.count(), Draft.objects.count()) == before
        return page


@pytest.fixture
def office() -> Office:
    return Office()


def typed(*rows: dict, **shared: str) -> dict:
    data = {"title": "Footings", "purpose": "stake", "key": str(uuid.uuid4()), **shared}
    for at, cells in enumerate(rows):
        data |= {f"{name}-{at}": text for name, text in cells.items()}
    return data


CONTROL = typed(
    {"label": "CP1", "northing": "1000", "easting": "2000", "elevation": "500"},
    {"label": "CP2", "northing": "1200", "easting": "2000", "elevation": "501"},
    purpose="control",
)
STAKES = typed({"label": "101", "northing": "1050.5", "easting": "2100"})


def test_marks_are_typed_checked_by_another_and_issued(office: Office) -> None:
    answer = office.send("stakes:marks-add", CONTROL, who="manager")
    draft = Draft.objects.get()
    assert answer.headers["Location"] == office.url("stakes:draft", draft=draft.key)
    assert "Waits for a check" in office.get("stakes:draft", draft=draft.key)
    office.send("stakes:draft-check", {"how": "second sheet"}, draft=draft.key)
    page = office.get("stakes:draft-issue", draft=draft.key)
    assert "Adopt the values of its control" in page
    issue = {"adopts": "on", "source": "city network", "position_mm": "3"}
    office.send("stakes:draft-issue", issue, draft=draft.key)
    page = office.get("stakes:control")
    assert "city network" in page
    assert "1000.00" in page
    assert Mark.objects.exclude(value=None).count() == 2


def test_a_manager_prepares_and_does_not_issue(office: Office) -> None:
    office.send("stakes:marks-add", STAKES, who="manager")
    draft = Draft.objects.get()
    office.send("stakes:draft-check", {"how": "x"}, draft=draft.key)
    answer = office.send("stakes:draft-issue", {}, who="manager", draft=draft.key)
    assert answer.status_code == 403
    assert not Mark.objects.exists()


def test_a_row_that_cannot_stand_is_named_and_everything_typed_is_kept(
    office: Office,
) -> None:
    rows = [
        {"label": "101", "northing": "1050.5", "easting": "2100"},
        {"label": "", "northing": ""},
        {"label": "1O1", "northing": "1", "easting": "2"},
        {"label": "103", "northing": "north", "easting": "2"},
    ]
    page = office.refused("stakes:marks-add", typed(*rows), "looks like 101")
    assert page.count('<p class="wrong">') == 2
    assert re.search(r'id="row-3-wrong".*?looks like', page, re.S)
    assert re.search(r'id="row-4-wrong".*?cannot be read', page, re.S)
    assert 'value="1050.5"' in page


def test_more_rows_keep_what_was_typed(office: Office) -> None:
    answer = office.send("stakes:marks-add", {**STAKES, "more": "1"})
    page = answer.content.decode()
    assert answer.status_code == 200
    assert 'name="label-8"' in page
    assert 'value="1050.5"' in page
    assert not Draft.objects.exists()


@pytest.mark.parametrize(
    "data, words",
    [
        ({}, "required"),
        (typed(), "no row"),
        (typed({"label": "1", "northing": "1", "easting": "2"}, title=""), "required"),
        (typed({"label": "x" * 300, "northing": "1", "easting": "2"}), "letters"),
        (typed({"label": "1", "northing": "9" * 300, "easting": "2"}), "northing"),
        ({**STAKES, "basis": [str(uuid.uuid4())]}, "not one of the available"),
        ({**STAKES, "tolerance": "<b>"}, "not one of the available"),
        ({**STAKES, "key": "nonsense"}, "valid UUID"),
        ({**STAKES, "label-0": "\x00"}, "no number"),
    ],
)
def test_hostile_rows_get_a_sentence(office: Office, data, words) -> None:
    office.refused("stakes:marks-add", data, words)


def test_a_form_sent_twice_makes_one_draft(office: Office) -> None:
    for _ in range(2):
        assert office.send("stakes:marks-add", STAKES).status_code == 302
    assert Draft.objects.count() == 1


def test_a_moved_mark_shows_by_how_much_before_it_is_issued(office: Office) -> None:
    plan(office.record, row("101", "1050.00", "2100.00"))
    office.send("stakes:marks-add", STAKES)
    page = office.get("stakes:draft", draft=Draft.objects.get().key)
    assert "1 moved" in page
    assert "0.500" in page


def test_a_stage_is_retired_from_the_page_of_drafts(office: Office) -> None:
    plan(office.record, row("1", "1", "1", stage="rough"))
    assert "1 in use" in office.get("stakes:drafts")
    office.refused("stakes:stage-retire", {"stage": "none such"}, "left to retire")
    office.send("stakes:stage-retire", {"stage": "rough", "reason": "graded"})
    assert Mark.objects.get().standing == "retired"


# Control


def test_a_value_is_adopted_and_both_values_stay_readable(office: Office) -> None:
    _, marks = field_job(office.record)
    data = {"northing": "1000.04", "easting": "2000", "source": "re-measured"}
    mark = marks["CP1"]
    office.refused("stakes:value-adopt", data, "why it changes", mark=mark)
    data["reason"] = "found leaning"
    office.send("stakes:value-adopt", data, mark=mark)
    page = office.get("stakes:control-mark", mark=mark)
    assert "1000.04" in page
    assert "traverse and level loop" in page
    assert "found leaning" in page
    refused = office.send("stakes:value-adopt", data, who="manager", mark=mark)
    assert refused.status_code == 403


def test_recovered_control_that_disagrees_is_a_question_on_the_page(
    office: Office,
) -> None:
    _, marks = field_job(office.record)
    page = office.get("stakes:control-recover", who="crew")
    assert "CP1, CP2," in page
    looked = {f"found_{m.hex}": "not looked for" for m in marks.values()}
    data = looked | {
        f"found_{marks['CP1'].hex}": "undisturbed",
        "distances": "CP1, CP2, 200.20\nCP1, CP3, \n",
        "rises": "BM1, BM2, 3.25",
    }
    answer = office.send("stakes:control-recover", data, who="crew")
    assert answer.status_code == 302, answer.content.decode()
    page = office.get("stakes:control")
    assert "1 measurement disagrees" in page
    assert "CP1 or CP2" in page


@pytest.mark.parametrize(
    "data, words",
    [
        ({}, "Nothing was found"),
        ({"distances": "CP1, CP9, 20"}, "Line 1: there is no control mark"),
        ({"distances": "CP1, CP2, far"}, "Line 1:"),
        ({"distances": "CP1, CP2, 2, 3"}, "Write mark, mark"),
        ({"distances": "x\n" * 400}, "at most 300 lines"),
        ({"distances": "CP1, CP1, 20"}, "to itself"),
        ({"at": "soon", "rises": "BM1, BM2, 3"}, "not a date"),
    ],
)
def test_control_work_that_cannot_be_read_gets_a_sentence(
    office: Office, data, words
) -> None:
    _, marks = field_job(office.record)
    looked = {f"found_{m.hex}": "not looked for" for m in marks.values()}
    office.refused("stakes:control-recover", {**looked, **data}, words)


def test_levels_that_close_lead_to_the_draft_of_their_new_benchmark(
    office: Office,
) -> None:
    _, marks = field_job(office.record)
    data = {
        "sort": "benchmark transfer",
        "start": str(marks["BM1"]),
        "setups": "BM9, 5.00, 3.50\nBM2, 6.00, 4.254",
    }
    answer = office.send("stakes:control-levels", data)
    draft = Draft.objects.get()
    assert answer.headers["Location"].endswith(f"{draft.key}/")
    assert draft.rows[0]["label"] == "BM9"
    data["setups"] = "BM9, 5.00, 3.50"
    office.refused("stakes:control-levels", data, "from one known elevation")


def test_a_traverse_is_entered_leg_by_leg(office: Office) -> None:
    _, marks = field_job(office.record)
    data = {
        "start": str(marks["CP1"]),
        "back": str(marks["CP2"]),
        "legs": "CP4, 90-00-00, 200\nT1, 90-00-00, 200\nT2, 90-00-00, 200\n"
        "CP1, 90-00-00, 200",
        "closing_back": str(marks["CP2"]),
        "closing_angle": "0-00-00",
        "class_name": "third order, class II",
    }
    assert office.send("stakes:control-traverse", data).status_code == 302
    assert [r["label"] for r in Draft.objects.get().rows] == ["T1", "T2"]
    office.refused("stakes:control-traverse", {**data, "legs": "T1, 9x, 1"}, "Line 1")
    office.refused(
        "stakes:control-traverse", {**data, "closing_angle": ""}, "closing angle"
    )


# Sheets


def test_a_sheet_is_received_with_its_file_and_read(
    office: Office, settings, tmp_path
) -> None:
    settings.DATA_DIR = tmp_path
    plan(office.record, row("101", "1", "1"))
    data = {
        "number": "A-101",
        "revision": "2",
        "status": "for construction",
        "touched": "101",
        "file": SimpleUploadedFile("a.pdf", b"<script>alert(1)</script>"),
    }
    office.send("stakes:sheet-add", data)
    sheet = Sheet.objects.get()
    assert "nobody yet" in office.get("stakes:sheets")
    office.send("stakes:sheet-read", {"changes_nothing": "on"}, sheet=sheet.key)
    assert "Surveyor" in office.get("stakes:sheet", sheet=sheet.key)
    answer = office.client("surveyor").get(
        office.url("stakes:sheet-file", sheet=sheet.key)
    )
    assert answer.headers["Content-Type"] == "application/octet-stream"
    assert "attachment" in answer.headers["Content-Disposition"]
    assert b"".join(answer.streaming_content) == b"<script>alert(1)</script>"


@pytest.mark.parametrize(
    "more, words",
    [
        ({"number": ""}, "required"),
        ({"touched": "999"}, "There is no mark 999"),
        ({"received_on": "March"}, "not a day"),
        ({"replaces": str(uuid.uuid4())}, "not one of the available"),
        ({"status": "nice"}, "not one of the available"),
    ],
)
def test_a_sheet_that_cannot_be_received_gets_a_sentence(
    office: Office, more, words
) -> None:
    data = {"number": "A-1", "revision": "1", "status": "preliminary", **more}
    office.refused("stakes:sheet-add", data, words)


def test_a_question_is_asked_and_answered(office: Office) -> None:
    plan(office.record, row("101", "1", "1"))
    data = {"words": "Grid B: no dimension", "to_whom": "Architect", "holds": "101"}
    office.send("stakes:question-ask", data)
    assert "Question to Architect" in office.get("stakes:sheets")
    question = Question.objects.get().key
    answer = {"words": "12.50", "by_whom": "Architect", "in_writing": "on"}
    office.send("stakes:question-answer", answer, question=question)
    assert "Nothing waits" in office.get("stakes:sheets")
    office.refused("stakes:question-answer", answer, "already", question=question)


def test_the_crew_records_a_verbal_direction_and_the_office_settles_it(
    office: Office,
) -> None:
    plan(office.record, row("101", "1", "1"))
    data = {"words": "Half a foot", "by_whom": "A", "to_whom": "B", "holds": "101"}
    answer = office.send("stakes:direction-give", data, who="crew")
    assert answer.status_code == 302
    page = office.get("stakes:sheets")
    assert "Not confirmed in writing" in page
    key = re.search(r"/directions/([0-9a-f-]{36})/settle/", page)
    assert key
    settle = {"confirmed": "yes", "words": "mail of the architect"}
    office.send("stakes:direction-settle", settle, direction=key[1])
    assert "Confirmed in writing" in office.get("stakes:sheets")


# Import


def imported(**more) -> dict:
    return {
        "text": "101,1050,2100,498\n102,1060,2110,\n",
        "unit": "ft",
        "order": NEZ,
        "purpose": "stake",
        **more,
    }


def test_pasted_points_become_a_draft(office: Office) -> None:
    answer = office.send("stakes:import", imported())
    draft = Draft.objects.get()
    assert answer.headers["Location"] == office.url("stakes:draft", draft=draft.key)
    assert not Entry.objects.filter(kind="file read").exists()


def test_a_file_with_doubts_is_kept_until_its_answers_are_mended(
    office: Office, settings, tmp_path
) -> None:
    settings.DATA_DIR = tmp_path
    plan(office.record, row("CP1", "1000", "2000", purpose="control"))
    file = SimpleUploadedFile("points.csv", b"201,2050,1050,1\n202,2060,10x,1\n")
    data = imported(text="", file=file)
    page = office.refused("stakes:import", data, "Line 2: The easting cannot be read")
    kept = re.search(r'name="kept" value="([0-9a-f]{64})"', page)
    assert kept
    data = imported(text="", kept=kept[1], kept_name="points.csv", leave_out="on")
    assert office.send("stakes:import", data).status_code == 302
    assert Draft.objects.get().about["left_out"] == [2]


@pytest.mark.parametrize(
    "more, words",
    [
        ({"text": ""}, "Choose a file, or paste"),
        ({"unit": ""}, "required"),
        ({"order": "by magic"}, "not one of the available"),
        ({"text": "\x00\x01"}, "Null characters"),
        ({"text": "", "kept": "../../etc/passwd"}, "Choose a file"),
        ({"text": "", "kept": "0" * 64}, "no longer here"),
        ({"text": "just words"}, "1 values"),
        ({"text": "1,2,3,4\n1,2,3,4"}, "stands in rows"),
    ],
)
def test_an_import_that_cannot_be_read_gets_a_sentence(
    office: Office, more, words
) -> None:
    office.refused("stakes:import", imported(**more), words)


def test_a_file_too_large_is_refused_by_its_size(office: Office, monkeypatch) -> None:
    monkeypatch.setattr("stakes.pages.office.importing.MOST_BYTES", 10)
    file = SimpleUploadedFile("big.csv", b"1,2,3,4\n" * 10)
    office.refused("stakes:import", imported(text="", file=file), "at most")


# Zones and layout


def footprint(office: Office) -> uuid.UUID:
    return draw_zone(
        record=office.record,
        name="Clinic",
        sort="footprint",
        corners=read_corners(RECTANGLE, office.record),
        by=SURVEYOR,
    )


def test_a_zone_is_drawn_drawn_again_and_taken_off(office: Office) -> None:
    data = {"sort": "footprint", "name": "Clinic", "corners": RECTANGLE}
    office.send("stakes:zone-add", data)
    zone = Zone.objects.get().key
    assert "1000, 2060" in office.get("stakes:zone-change", zone=zone)
    office.refused(
        "stakes:zone-change", {**data, "corners": "1,1"}, "different corners", zone=zone
    )
    office.send("stakes:zone-change", {**data, "name": "Wing"}, zone=zone)
    assert "Wing" in office.get("stakes:zones")
    office.send("stakes:zone-remove", {}, zone=zone)
    assert not Zone.objects.exists()


def test_a_layout_is_drawn_and_redrawn_as_a_fragment(office: Office) -> None:
    footprint(office)
    page = office.get("stakes:layout")
    assert "8 stakes" in page
    assert "Draw it again" in page
    client = office.client("surveyor")
    zone = Zone.objects.get().key
    answer = client.get(
        office.url("stakes:layout"),
        {
            "footprint": zone,
            "offset": "5",
            "step": "5",
            "depth": "10",
            "work_space": "2",
            "clearance": "2",
            "stake_set": "plain",
            "one_value": "on",
            "first_number": "101",
        },
        headers={"HX-Request": "true"},
    )
    part = answer.content.decode()
    assert "<html" not in part
    assert "not for digging" in part
    assert "competent person" in part
    assert "20.00" in part


def test_a_layout_is_kept_as_it_was_shown(office: Office) -> None:
    zone = footprint(office)
    data = {
        "footprint": str(zone),
        "offset": "10",
        "step": "5",
        "depth": "0",
        "work_space": "2",
        "clearance": "2",
        "stake_set": "plain",
        "one_value": "on",
        "first_number": "201",
        "stage": "footing",
    }
    office.send("stakes:layout-keep", data)
    draft = Draft.objects.get()
    assert draft.rows[0]["label"] == "201"
    assert draft.rows[0]["stage"] == "footing"
    office.refused("stakes:layout-keep", {**data, "offset": "-1"}, "offset")
    office.refused("stakes:layout-keep", {**data, "first_number": "x"}, "whole number")


def test_a_job_without_footprint_says_what_comes_first(office: Office) -> None:
    assert "Draw the footprint first" in office.get("stakes:layout")


def test_the_soil_is_classified_by_name_and_day(office: Office) -> None:
    zone = footprint(office)
    data = {"soil": "type B", "by_whom": "Superintendent", "on": "2026-03-03"}
    office.refused("stakes:soil-classify", {**data, "on": ""}, "required", zone=zone)
    office.send("stakes:soil-classify", data, zone=zone)
    assert "classified by Superintendent" in office.get("stakes:layout")


# Points out


def test_points_leave_as_comma_text_and_geojson(office: Office) -> None:
    plan(office.record, row("101", "1050.5", "2100", "498", words="x"))
    plan(office.record, row("=1+1", "1", "2"))
    text = office.get("stakes:marks-csv")
    assert "101,1050.5000,2100.0000,498.0000,ft,stake" in text
    assert "'=1+1" in text
    answer = office.client("surveyor").get(office.url("stakes:marks-geojson"))
    told = {f["properties"]["number"]: f for f in answer.json()["features"]}
    # RFC 7946, section 4: coordinates are WGS 84 degrees, which a job's are not.
    assert told["101"]["geometry"] is None
    assert told["101"]["properties"]["easting"] == "2100.0000"
    assert told["101"]["properties"]["unit"] == "ft"
    assert office.client("crew").get(office.url("stakes:marks-csv")).status_code == 403


def test_every_id_is_looked_for_in_its_own_job(office: Office) -> None:
    other = make_job("9999").record
    (mark,) = plan(other, row("CP1", "1", "1", purpose="control"))
    for name, ids in (
        ("stakes:control-mark", {"mark": mark}),
        ("stakes:draft", {"draft": uuid.uuid4()}),
        ("stakes:sheet", {"sheet": uuid.uuid4()}),
        ("stakes:zone-change", {"zone": uuid.uuid4()}),
    ):
        answer = office.client("surveyor").get(office.url(name, **ids))
        assert answer.status_code == 404, name


def test_a_foreign_mark_gets_a_value_only_from_the_surveyor(office: Office) -> None:
    (mark,) = plan(office.record, row("F1", "1", "1", purpose="foreign"))
    data = {"northing": "1.02", "easting": "1", "source": "tied from CP1 and CP2"}
    office.send("stakes:value-adopt", data, mark=mark)
    assert Mark.objects.get(key=mark).value is not None
    answer = office.send("stakes:value-adopt", data, who="party_chief", mark=mark)
    assert answer.status_code == 403


def test_more_marks_than_one_plan_holds_are_refused(
    office: Office, monkeypatch
) -> None:
    monkeypatch.setattr("stakes.actions.issuing.MOST_ROWS", 1)
    office.refused("stakes:import", imported(), "too many for one plan")


def test_a_sheet_supersedes_what_it_takes_away(office: Office) -> None:
    plan(office.record, row("101", "1", "1"))
    data = {"number": "A-1", "revision": "2", "status": "preliminary", "touched": "101"}
    office.send("stakes:sheet-add", data)
    sheet = Sheet.objects.get().key
    assert 'value="101"' in office.get("stakes:sheet-supersede", sheet=sheet)
    said = {"marks": "101", "reason": "wall left out"}
    assert office.send("stakes:sheet-supersede", said, sheet=sheet).status_code == 302
    said = {"marks": "999", "reason": "x"}
    office.refused("stakes:sheet-supersede", said, "There is no mark", sheet=sheet)


def test_a_doubt_is_answered_in_writing_by_the_surveyor_alone(office: Office) -> None:
    field_job(office.record)
    data = {"marks": "CP1", "components": "pe", "reason": "the hub is firm"}
    assert office.send("stakes:doubt-answer", data, who="manager").status_code == 403
    assert office.send("stakes:doubt-answer", data).status_code == 302
    office.refused("stakes:doubt-answer", {**data, "marks": "X9"}, "no mark X9")
