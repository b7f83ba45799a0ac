"""Points from comma text: read whole, doubted, complained about by line, or not kept."""

from __future__ import annotations

import time

import pytest

from geometry.units import Unit
from stakes.actions.importing import ImportRefused, import_points
from stakes.actions.issuing import check_plan, issue_plan
from stakes.exchange.comma import MOST_LINES, ORDERS, Answers, Unreadable, read_points
from stakes.exchange.doubts import doubts
from stakes.exchange.writing import comma_text
from stakes.models import Draft, Entry, Mark
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import CHIEF, SURVEYOR, make_record, plan, row

pytestmark = pytest.mark.django_db

NEZ, ENZ, *_ = ORDERS
FEET = Answers(Unit.FOOT, order=NEZ)
GOOD = "101,1050.50,2100.25,498.5,corner\n102,1060,2110,,face of wall\n"


def brought(record, text: str | bytes, answers: Answers = FEET, **more) -> Draft:
    data = text if isinstance(text, bytes) else text.encode()
    return import_points(
        record=record, data=data, answers=answers, by=CHIEF, name="points.csv", **more
    )


def complaints_of(text: str | bytes, answers: Answers = FEET) -> list[str]:
    data = text if isinstance(text, bytes) else text.encode()
    return [f"{c.row}: {c.what}" for c in read_points(data, answers).complaints]


def test_a_file_becomes_a_draft_and_its_hash_stands_in_the_record_when_issued() -> None:
    record = make_record()
    draft = brought(record, GOOD)
    assert not Entry.objects.exists()
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="plotted")
    entries = issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert [e.kind for e in entries] == ["planned", "file read"]
    assert "No elevation" in entries[1].body
    # sha256sum of the two lines
    assert draft.about["file_sha256"] in entries[1].body
    assert Mark.objects.get(label="102").carries == "position"
    assert Mark.objects.get(label="101").words == "corner"


def test_every_complaint_names_its_line() -> None:
    text = "101,1,2,3\n102,1,x,3\n\n101,5,6,7\n,8,9,1\n103,1\n"
    with pytest.raises(ImportRefused) as refused:
        brought(make_record(), text)
    said = {(c.row, c.field) for c in refused.value.complaints if c.grave}
    assert (2, "easting") in said
    assert (4, "label") in said
    assert (5, "label") in said
    assert any(row == 6 for row, _ in said)
    assert not Draft.objects.exists()


def test_lines_complained_of_are_left_out_only_when_that_is_said() -> None:
    record = make_record()
    draft = brought(record, "101,1,2,3\n102,1,x,3\n", leave_out=True)
    assert draft.about["left_out"] == [2]
    assert [r["label"] for r in draft.rows] == ["101"]


@pytest.mark.parametrize(
    "text, labels",
    [
        (b"\xef\xbb\xbf007,1,2,3\n", ["007"]),
        ("007,1,2,3\n".encode("utf-16"), ["007"]),
        (b"N\xf6rd,1,2,3\n", ["Nörd"]),
        (b'"A, east",1,2,3\n', ["A, east"]),
        (b"101;1,5;2,5;3\n", ["101"]),
        (b"101\t1\t2\t3\r\n102\t1\t2\t3\r\n", ["101", "102"]),
        (b"# site\n101,1,2,3\n", ["101"]),
    ],
)
def test_encodings_quotes_and_separators_are_read(text: bytes, labels) -> None:
    assert [r.label for r in read_points(text, FEET).rows] == labels


def test_a_file_that_is_not_utf8_says_how_it_was_read() -> None:
    assert any("Windows-1252" in c for c in complaints_of(b"N\xf6rd,1,2,3\n"))


def test_a_header_names_the_columns_whatever_their_order() -> None:
    read = read_points(b"Desc,E,N,Z,Point\ncorner,2,1,3,101\n", Answers(Unit.METRE))
    assert read.header == ("Desc", "E", "N", "Z", "Point")
    assert (read.rows[0].northing.text, read.rows[0].easting.text) == ("1", "2")


def test_a_header_against_the_answered_order_is_a_complaint() -> None:
    said = complaints_of("Point,E,N,Z\n101,2,1,3\n")
    assert any("header says easting first" in c for c in said)


def test_a_file_without_header_asks_for_its_order() -> None:
    with pytest.raises(Unreadable, match="Choose their order"):
        read_points(GOOD.encode(), Answers(Unit.FOOT))


@pytest.mark.parametrize("nothing", ["-9999", "-9999.00", "NaN", "n/a", "99999"])
def test_an_elevation_that_stands_for_none_is_none(nothing: str) -> None:
    read = read_points(f"101,1,2,{nothing}\n".encode(), FEET)
    assert read.rows[0].elevation is None
    assert f"Elevation {nothing} stands for none" in read.complaints[0].what


@pytest.mark.parametrize(
    "text, words",
    [
        (b"", "no point"),
        (b"PK\x03\x04\x00\x00", "no text file"),
        (b"\xff\xfe\x00", "broken"),
        (b"\n\n", "no point"),
    ],
)
def test_what_is_no_text_is_refused_with_a_sentence(text: bytes, words: str) -> None:
    with pytest.raises(Refused, match=words):
        brought(make_record(), text)
    assert not Draft.objects.exists()


def test_a_quote_left_open_swallows_no_points_in_silence() -> None:
    said = complaints_of('101,1,2,3\n102,1,2,3,"oops\n103,1,2,3\n')
    assert any(c.startswith("2: A quote opened here") for c in said)


KNOWN = {"CP1": (1000.0, 2000.0), "CP2": (1200.0, 2000.0), "CP3": (1200.0, 2200.0)}
GRID = {k: (n + 2_000_000.0, e + 600_000.0) for k, (n, e) in KNOWN.items()}


def times(points, factor):
    return {k: (n * factor, e * factor) for k, (n, e) in points.items()}


@pytest.mark.parametrize(
    "points, known, name",
    [
        ({k: (e, n) for k, (n, e) in KNOWN.items()}, KNOWN, "swapped axes"),
        (times(KNOWN, 1 / 0.3048), KNOWN, "other unit"),
        (times(KNOWN, 0.3048), KNOWN, "other unit"),
        (times(GRID, 0.999998), GRID, "the other foot"),
        (times(GRID, 1.000002), GRID, "the other foot"),
        ({"CP1": (1000.0, 2003.0)}, KNOWN, "known mark elsewhere"),
        ({"7": (2050.0, 1060.0)}, {"CP1": (1000.0, 9000.0)}, "not on the site"),
        ({"7": (9050.0, 1060.0)}, {"CP1": (1000.0, 9000.0)}, "swapped axes"),
        ({"7": (3444.0, 29600.0)}, {"CP1": (1000.0, 9000.0)}, "other unit"),
    ],
)
def test_a_file_is_doubted_beside_known_control(points, known, name) -> None:
    assert [d.name for d in doubts(points, known)] == [name]


def test_a_file_that_fits_is_not_doubted() -> None:
    assert doubts(KNOWN, KNOWN) == []
    assert doubts({"7": (1100.0, 2100.0)}, KNOWN) == []
    assert doubts({}, KNOWN) == []


def test_doubts_hold_the_file_back_until_somebody_looked() -> None:
    record = make_record()
    plan(record, row("CP1", "1000", "2000", purpose="control"))
    swapped = "CP1,2000,1000\n201,2050,1050\n"
    with pytest.raises(ImportRefused) as refused:
        brought(record, swapped, Answers(Unit.FOOT, order=NEZ))
    assert refused.value.doubts[0].name == "swapped axes"
    right = brought(record, "201,2050,1050\n", Answers(Unit.FOOT, order=ENZ))
    assert right.rows[0]["northing"]["text"] == "1050"


def test_numbers_are_kept_as_they_stand_and_look_alikes_named_with_their_lines() -> (
    None
):
    with pytest.raises(ImportRefused) as refused:
        brought(make_record(), "007,1,2,3\n7,1,2,3\n1O1,5,6,7\n101,8,9,1\n")
    said = [c.sentence for c in refused.value.complaints if c.grave]
    assert any("7 looks like 007" in s for s in said)
    assert any("101 looks like 1O1" in s for s in said)


def test_another_unit_is_kept_as_entered() -> None:
    record = make_record()
    draft = brought(record, "101,100,200,1\n", Answers(Unit.METRE, order=NEZ))
    assert draft.rows[0]["northing"] == {
        "text": "100",
        "unit": "m",
        "nm": "100000000000",
    }


def test_more_lines_than_are_read_are_refused() -> None:
    data = b"1,1,2,3\n" * (MOST_LINES + 2)
    with pytest.raises(Unreadable, match="100,000 lines"):
        read_points(data, FEET)


def test_ten_thousand_lines_are_read_in_a_few_seconds() -> None:
    """A whole-file bound: a hundred thousand take ten times as long, not more."""
    data = "".join(f"{n},{n}.5,2000.25,{n % 90}.1,x\n" for n in range(10_000))
    began = time.perf_counter()
    read = read_points(data.encode(), FEET)
    assert len(read.rows) == 10_000
    assert time.perf_counter() - began < 10


def test_control_that_agrees_with_the_job_is_left_out_with_a_note() -> None:
    record = make_record()
    plan(record, row("CP1", "1000", "2000", purpose="control"))
    draft = brought(record, "CP1,1000.005,2000,\n101,1050,2100,1\n")
    assert [r["label"] for r in draft.rows] == ["101"]
    assert (
        "Line 1: CP1 is control on this job and agrees; left out."
        in (draft.about["complaints"])
    )
    with pytest.raises(ImportRefused) as refused:
        brought(record, "CP1,1000.2,2000,\n102,1050,2100,1\n")
    assert "is control on this job" in refused.value.complaints[1].what


def test_what_is_exported_is_read_back_as_it_was() -> None:
    record = make_record()
    plan(
        record,
        row("007", "1050.5", "2100.25", "498.123", sort='corner, "east"'),
        row("CP1", "1000", "2000", purpose="control", carries="position"),
    )
    text = comma_text(job_state(record))
    assert "\r\n" in text
    read = read_points(text.encode(), Answers(Unit.FOOT))
    found = {r.label: (r.northing.nm, r.easting.nm) for r in read.rows}
    marks = Mark.objects.values_list("label", "northing_nm", "easting_nm")
    assert found == {label: (n, e) for label, n, e in marks}
