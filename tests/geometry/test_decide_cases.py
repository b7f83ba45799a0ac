"""The committed cases: the same verdicts and digits as exact arithmetic gives."""

from __future__ import annotations

import json

import pytest

from geometry.decide import Rule, decide, decide_radial, shown
from geometry.precision import cut_fill, setting_out, shown_cut_fill
from geometry.units.angles import azimuth_text
from tests.geometry.decide_cases import PATH, cases, written

CASES = json.loads(PATH.read_text(encoding="utf-8"))


def number(text: str | None) -> float | None:
    return None if text is None else float(text)


def test_the_committed_file_is_what_exact_arithmetic_gives():
    assert PATH.read_text(encoding="utf-8") == written(cases())


def test_the_file_holds_every_verdict_and_the_limits_themselves():
    rows = CASES["offsets"] + CASES["positions"]
    assert {row["verdict"] for row in rows} == {"pass", "fail", "undecided"}
    assert len(rows) + len(CASES["digits"]) > 300


@pytest.mark.parametrize("case", CASES["offsets"])
def test_a_number_gets_the_verdict_and_digits_of_the_file(case):
    difference = float(case["measured"]) - float(case["computed"])
    decision = decide(
        difference,
        float(case["tolerance"]),
        number(case["uncertainty"]),
        rule=Rule(case["rule"]),
        factor=float(case["factor"]),
        tolerance_below=number(case["tolerance_below"]),
    )
    assert decision.verdict.value == case["verdict"]
    assert shown(difference, case["places"]) == case["difference"]


@pytest.mark.parametrize("case", CASES["positions"])
def test_a_position_gets_the_verdict_and_digits_of_the_file(case):
    east, north = (
        float(m) - float(c)
        for m, c in zip(case["measured"], case["computed"], strict=True)
    )
    decision = decide_radial(
        (east, north),
        float(case["tolerance"]),
        number(case["uncertainty"]),
        rule=Rule(case["rule"]),
        factor=float(case["factor"]),
    )
    assert decision.verdict.value == case["verdict"]
    assert shown(decision.difference, case["places"]) == case["difference"]
    assert shown(east, case["places"]) == case["east"]
    assert shown(north, case["places"]) == case["north"]


@pytest.mark.parametrize("case", CASES["digits"])
def test_a_value_shows_the_digits_of_the_file(case):
    assert shown(float(case["value"]), case["places"]) == case["shown"]


@pytest.mark.parametrize("case", CASES["polar"])
def test_setting_out_numbers_are_those_of_the_file(case):
    numbers = setting_out(
        *([float(x) for x in case[name]] for name in ("station", "backsight", "target"))
    )
    assert azimuth_text(numbers.azimuth_rad) == case["azimuth"]
    assert azimuth_text(numbers.angle_right_rad) == case["angle_right"]
    assert shown(numbers.distance_m, case["places"]) == case["distance"]


@pytest.mark.parametrize("case", CASES["cuts"])
def test_cut_and_fill_are_those_of_the_file(case):
    amount = cut_fill(float(case["stake"]), float(case["design"])).amount
    assert shown_cut_fill(amount, 2) == (case["word"], case["shown"])
