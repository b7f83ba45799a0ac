"""What a mark is held to: its own class, or a careful one that says so."""

from __future__ import annotations

import pytest

from geometry.decide import Rule
from stakes.queries import tolerance
from tests.builders import make_record, measured, plan, row

pytestmark = pytest.mark.django_db


def test_a_record_without_terms_is_held_to_the_usual_table_in_its_unit() -> None:
    classes = tolerance.classes_of(make_record(unit="m"))
    assert classes["Control"].position_mm == pytest.approx(3.0)
    assert all(c.default and c.source for c in classes.values())


def test_a_mark_is_held_to_the_class_it_names_or_to_the_one_for_buildings() -> None:
    from stakes.models import Mark

    record = make_record()
    named, other, control = plan(
        record,
        row("1", "1", "1", tolerance="Rough"),
        row("2", "1", "1"),
        row("CP", "1", "1", purpose="control"),
    )
    rough = tolerance.ToleranceClass(name="Rough", position=measured("0.15"))
    classes = {"Rough": rough, **tolerance.classes_of(record)}
    marks = Mark.objects.in_bulk()
    assert tolerance.class_of(marks[named], classes) is rough
    assert tolerance.class_of(marks[other], classes).name.startswith("Building")
    assert tolerance.class_of(marks[control], classes).name == "Control"


def test_the_classes_of_the_job_come_from_its_terms() -> None:
    from tests.jobs.cast import make_job

    classes = tolerance.classes_of(make_job().record)
    assert classes["Anchor rods"].rule is Rule.GUARDED
    assert classes["Anchor rods"].grade == 1
