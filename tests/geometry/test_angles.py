"""Angles, azimuths and bearings are read, carried at sixty and printed."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import EmptyInput, GeometryError, NotReadable, OutOfRange
from geometry.units import (
    Angle,
    AngleUnit,
    angle_text,
    azimuth_text,
    bearing_text,
    full_turn,
    half_turn,
    mean_direction,
    turn_text,
)
from geometry.units.turns import SECONDS_PER_RADIAN

DMS, DEG, GON = AngleUnit.DMS, AngleUnit.DEGREES, AngleUnit.GON


def dms(degrees: int, minutes: int = 0, seconds: float = 0.0) -> float:
    return math.radians(degrees + minutes / 60 + seconds / 3600)


def test_a_radian_has_206_264_806_seconds_and_636_619_772_cc() -> None:
    # published constant, recomputed
    assert pytest.approx(206264.806, abs=5e-4) == SECONDS_PER_RADIAN
    assert angle_text(1.0, GON, 7) == "63.6619772 gon"


@pytest.mark.parametrize(
    ("text", "degrees"),
    [
        ("30°15'20\"", Fraction(30 * 3600 + 15 * 60 + 20, 3600)),
        ("30-15-20", Fraction(108920, 3600)),
        ("30 15 20.5", Fraction(217841, 7200)),
        ("30d15m20s", Fraction(108920, 3600)),
        ("30°15′20″", Fraction(108920, 3600)),
        ("30°15.5'", Fraction(30 * 3600 + 930, 3600)),
        ("30-15", Fraction(30 * 3600 + 900, 3600)),
        ("-0°30'", Fraction(-1, 2)),
        ("−0-30-00", Fraction(-1, 2)),
        ("30.25°", Fraction(121, 4)),
        ("45", Fraction(45)),
        ("50 gon", Fraction(45)),
        ("50g", Fraction(45)),
        ("360", Fraction(360)),
    ],
)
def test_an_angle_is_read_as_it_is_written(text: str, degrees: Fraction) -> None:
    assert Angle.parse(text).seconds == degrees * 3600


def test_a_plain_number_means_the_jobs_unit() -> None:
    assert Angle.parse("33.6", GON).seconds == Fraction(336, 4000) * 1296000
    assert Angle.parse("33.6", DEG).seconds == Fraction(336 * 360)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("30.1520", "packed"),
        ("30-60-00", "60 or more"),
        ("30-15-60", "60 or more"),
        ("30°61'", "60 or more"),
        ("361", "full turn"),
        ("400.1 gon", "full turn"),
        ("N 91 E", "not an angle"),
        ("", "empty"),
        ("north", "not an angle"),
        ("1e2", "not an angle"),
        ("nan", "not an angle"),
        ("9" * 100, "too long"),
    ],
)
def test_what_is_not_an_angle_is_refused(text: str, says: str) -> None:
    with pytest.raises(NotReadable, match=says) as refusal:
        Angle.parse(text)
    assert refusal.value.do


@pytest.mark.parametrize(
    ("text", "azimuth"),
    [
        ("N 30°15'20\" E", "30°15'20\""),
        ("S29°38'E", "150°22'00\""),
        ("S6-15W", "186°15'00\""),
        ("n 81°18' w", "278°42'00\""),
        ("N 15.5° E", "15°30'00\""),
        ("N 50 gon E", "45°00'00\""),
        ("N-30-15-20-E", "30°15'20\""),
        ("N 90 E", "90°00'00\""),
        ("N 0 W", "0°00'00\""),
        ("due south", "180°00'00\""),
        ("360", "0°00'00\""),
    ],
)
def test_a_direction_is_an_azimuth_or_a_bearing(text: str, azimuth: str) -> None:
    assert azimuth_text(Angle.parse_direction(text).radians) == azimuth


def test_a_direction_has_no_sign_and_a_bearing_stays_in_its_quadrant() -> None:
    with pytest.raises(NotReadable, match="no sign"):
        Angle.parse_direction("-10")
    with pytest.raises(NotReadable, match="at most 90"):
        Angle.parse_direction("N 91 E")


def test_seconds_carry_into_minutes_and_degrees() -> None:
    assert angle_text(dms(29, 59, 59.6)) == "30°00'00\""
    assert angle_text(dms(29, 59, 59.96), decimals=1) == "30°00'00.0\""
    assert azimuth_text(dms(359, 59, 59.6)) == "0°00'00\""
    assert azimuth_text(dms(359, 59, 59.4)) == "359°59'59\""
    assert bearing_text(dms(89, 59, 59.6)) == "N 90°00'00\" E"


def test_half_a_second_rounds_away_from_zero() -> None:
    assert angle_text(Angle.parse("30-15-20.5").radians) == "30°15'21\""
    assert angle_text(Angle.parse("-30-15-20.5").radians) == "-30°15'21\""


def test_the_sign_of_less_than_a_degree_is_kept_and_zero_has_none() -> None:
    assert angle_text(dms(0, -30)) == "-0°30'00\""
    assert angle_text(-1e-9) == "0°00'00\""
    assert turn_text(-1e-9) == "0°00'00\""


def test_the_four_cardinal_bearings() -> None:
    texts = [bearing_text(math.radians(a)) for a in (0, 90, 180, 270)]
    assert texts == [
        "N 0°00'00\" E",
        "N 90°00'00\" E",
        "S 0°00'00\" W",
        "N 90°00'00\" W",
    ]


def test_a_mean_across_north_is_north() -> None:
    assert mean_direction(np.radians([350.0, 10.0])) == pytest.approx(0.0, abs=1e-12)
    with pytest.raises(OutOfRange, match="cancel"):
        mean_direction([0.0, math.pi])
    with pytest.raises(EmptyInput):
        mean_direction([])


def test_an_infinite_angle_is_refused() -> None:
    for bad in (math.nan, math.inf):
        for printed in (angle_text, azimuth_text, bearing_text, turn_text, full_turn):
            with pytest.raises(GeometryError):
                printed(bad)


@given(st.integers(0, 1_295_999_999))
def test_azimuths_and_bearings_come_back_as_printed(milliseconds: int) -> None:
    seconds = Fraction(milliseconds, 1000)
    azimuth = float(seconds) / SECONDS_PER_RADIAN
    for text in (azimuth_text(azimuth, decimals=3), bearing_text(azimuth, decimals=3)):
        assert Angle.parse_direction(text).seconds == seconds


@given(st.integers(0, 1_295_999_999), st.sampled_from([DEG, GON]))
def test_decimal_degrees_and_gon_come_back_as_printed(ms: int, unit: AngleUnit) -> None:
    azimuth = ms / 1000 / SECONDS_PER_RADIAN
    read = Angle.parse_direction(azimuth_text(azimuth, unit, 8), unit)
    assert abs(float(read.seconds) - ms / 1000) < 2e-5


@given(st.floats(-1e3, 1e3))
def test_one_turn_and_half_a_turn_name_the_same_direction(angle: float) -> None:
    full, half = full_turn(angle), half_turn(angle)
    assert 0 <= full < 2 * math.pi
    assert -math.pi <= half <= math.pi
    assert math.cos(full - half) == pytest.approx(1.0)


@given(st.text(max_size=50), st.sampled_from(AngleUnit))
def test_any_text_is_an_angle_or_a_refusal(text: str, unit: AngleUnit) -> None:
    for read in (Angle.parse, Angle.parse_direction):
        try:
            angle = read(text, unit)
        except NotReadable as refusal:
            assert refusal.do
        else:
            assert abs(angle.seconds) <= 1_296_000


@given(st.text(alphabet="0123456789°'\" -.NSEWgon", max_size=16))
def test_nearly_right_directions_are_read_or_refused(text: str) -> None:
    try:
        angle = Angle.parse_direction(text)
    except NotReadable as refusal:
        assert refusal.where
    else:
        assert 0 <= angle.seconds < 1_296_000
