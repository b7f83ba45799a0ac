"""The crew's home: what needs doing, found by label, with the visit kept."""

from __future__ import annotations

import uuid

from django.utils import timezone

from stakes.actions.condition import report_gone
from stakes.models import Entry
from tests.builders import CHIEF
from tests.fieldwork import station
from tests.pages.crew import Field, put, setup_of, text


def test_home_lists_marks_by_what_needs_doing(ready: Field) -> None:
    page = text(ready.get())
    assert "To set" in page
    assert ">101<" in page
    assert "Control" in page
    assert "Total station on a mark" in page


def test_home_finds_a_mark_by_its_label(ready: Field) -> None:
    found = ready.get(q="101")
    assert found.status_code == 303
    assert found.url.endswith(f"marks/{ready.marks['101']}/")
    assert "No mark fits" in text(ready.get(q="zzz"))
    assert ">102<" in text(ready.get(q="10"))


def test_the_visit_is_kept_in_every_link(ready: Field) -> None:
    visit = uuid.uuid4()
    assert f"visit={visit}" not in text(ready.get(visit=str(visit)))
    station(ready.record, ready.marks, occasion=visit, at=timezone.now())
    page = text(ready.get(visit=str(visit)))
    assert f"marks/{ready.marks['101']}/?visit={visit}" in page


def test_a_gone_mark_is_listed_as_gone_and_can_be_set_again(ready: Field) -> None:
    put(ready, "101")
    report_gone(record=ready.record, marks=[ready.marks["101"]], by=CHIEF)
    assert "Gone" in text(ready.get())
    done = ready.post(
        f"marks/{ready.marks['101']}/set/",
        setup=setup_of(ready),
        holds="hub and tack",
    )
    assert done.status_code == 303, text(done)
    assert ready.stake("101").ordinal == 2


def test_the_number_of_queries_of_the_home_does_not_grow_with_marks(
    ready: Field, django_assert_max_num_queries
) -> None:
    from tests.builders import plan, row

    plan(ready.record, *(row(f"9{n:03}", "1", str(n)) for n in range(300)))
    with django_assert_max_num_queries(40):
        page = text(ready.get())
    assert "All 304" in page
    assert Entry.objects.filter(record=ready.record).exists()
