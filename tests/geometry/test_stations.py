"""Stations, feet and inches, chains and areas are read and printed exactly."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import GeometryError, MixedFrames, NotReadable, OutOfRange
from geometry.units import (
    AreaUnit,
    Length,
    Station,
    Unit,
    area_text,
    chains,
    feet_inches,
)

FT, US, M = Unit.FOOT, Unit.US_SURVEY_FOOT, Unit.METRE


def test_stations_are_read_in_hundreds_of_feet_and_thousands_of_metres() -> None:
    assert Station.parse("64+27.46", FT).value == Length.parse("6427.46", FT)
    assert Station.parse("1+234.567", M).value == Length.parse("1234.567", M)
    assert Station.parse("12+34.5", M, full_station=100).value.metres == 1234.5


def test_a_station_carries_into_the_next_full_station() -> None:
    assert Station(Length.parse("6399.996", FT)).shown(FT) == "64+00.00"
    assert Station(Length.parse("999.9996", M)).shown(M, 3) == "1+000.000"


def test_a_station_before_zero_keeps_its_sign() -> None:
    assert Station.parse("-0+12.50", FT).shown(FT) == "-0+12.50"
    assert Station.parse("-0+00.001", FT).shown(FT) == "0+00.00"


def test_the_region_behind_an_equation_is_kept() -> None:
    station = Station.parse("12+50.00 r2", FT)
    assert (station.region, station.shown(FT)) == (2, "12+50.00 R2")


@pytest.mark.parametrize(
    "text",
    [
        "6427.46",
        "64+7.46",
        "64+127",
        "64 27",
        "",
        "64+27.46 R0",
        "a+00",
        "1+" + "0" * 99,
    ],
)
def test_what_is_not_a_station_is_refused(text: str) -> None:
    with pytest.raises(NotReadable) as refusal:
        Station.parse(text, FT)
    assert refusal.value.do


def test_a_full_station_is_a_power_of_ten() -> None:
    with pytest.raises(OutOfRange):
        Station.parse("1+00", FT, full_station=66)


@given(
    st.decimals(min_value=-(10**6), max_value=10**6, places=2), st.sampled_from(Unit)
)
def test_stations_come_back_as_printed(value: Decimal, unit: Unit) -> None:
    station = Station(Length.parse(f"{value:f}", unit))
    assert Station.parse(station.shown(unit), unit) == station


@given(st.text(max_size=45))
def test_any_text_is_a_station_or_a_refusal(text: str) -> None:
    try:
        Station.parse(text, FT)
    except GeometryError as refusal:
        assert refusal.what


@pytest.mark.parametrize(
    ("feet", "printed"),
    [
        ("12.61", "12'-7 3/8\""),
        ("12.609375", "12'-7 3/8\""),  # 5/16 is a half of the eighth, away from zero
        ("0.5", "0'-6\""),
        ("0", "0'-0\""),
        ("-0.001", "0'-0\""),
        ("11.999", "12'-0\""),
        ("-11.999", "-12'-0\""),
        ("3.99", "3'-11 7/8\""),
        ("1.0416666667", "1'-0 1/2\""),
    ],
)
def test_feet_and_inches_to_the_eighth_carry(feet: str, printed: str) -> None:
    assert feet_inches(Length.parse(feet, FT)) == printed


def test_inches_are_printed_to_the_fraction_asked_for() -> None:
    length = Length.parse("12'-7 5/16\"", FT)
    assert feet_inches(length, 16) == "12'-7 5/16\""
    assert feet_inches(length, 1) == "12'-7\""
    with pytest.raises(OutOfRange, match="64ths"):
        feet_inches(length, 10)
    with pytest.raises(MixedFrames):
        feet_inches(length, 8, M)


@given(st.integers(-(10**6), 10**6), st.sampled_from([FT, US]))
def test_feet_and_inches_come_back_as_printed(eighths: int, foot: Unit) -> None:
    nanometres = round(Fraction(eighths, 96) * foot.metres_per_unit * 10**9)
    printed = feet_inches(Length("", foot, nanometres), 64, foot)
    assert Length.parse(printed, foot).nanometres == nanometres


def test_chains_rods_and_links_are_feet() -> None:
    # NIST Handbook 44 App. C; BLM Manual (from memory)
    assert chains(FT, chains=1).in_unit(FT) == 66
    assert chains(FT, rods=1).in_unit(FT) == Fraction(33, 2)
    assert chains(FT, chains=80).in_unit(FT) == 5280
    assert chains(FT, chains=12, links=34).text == "814.44"
    with pytest.raises(OutOfRange):
        chains(M, chains=1)


def test_an_acre_is_43_560_square_feet_of_its_foot() -> None:
    # NIST SP 811 (from memory), recomputed
    assert area_text(4046.8564224, AreaUnit.ACRE, 6) == "1.000000"
    survey, international = AreaUnit.ACRE_US, AreaUnit.ACRE
    assert float(survey.square_metres) == pytest.approx(4046.872609874, abs=1e-9)
    assert float(international.square_metres) == pytest.approx(4046.8564224, abs=1e-12)
    with pytest.raises(GeometryError):
        area_text(float("nan"), AreaUnit.ACRE, 3)
