"""Lengths are read as people write them, kept exactly and rounded once."""

from __future__ import annotations

from decimal import ROUND_HALF_UP, Decimal
from fractions import Fraction
from time import perf_counter

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import GeometryError, NotFinite, NotReadable, OutOfRange
from geometry.units import Length, Unit

FT, US, M = Unit.FOOT, Unit.US_SURVEY_FOOT, Unit.METRE


def test_the_international_foot_is_exactly_0_3048_m() -> None:
    # 85 FR 62698, 5 October 2020
    assert Length.parse("1", FT).nanometres == 304_800_000


def test_the_us_survey_foot_is_1200_3937_m() -> None:
    # NIST SP 811 (from memory); 85 FR 62698
    assert US.metres_per_unit == Fraction(1200, 3937)
    assert f"{float(US.metres_per_unit):.15f}" == "0.304800609601219"


def test_a_metre_is_3_2808333333_survey_and_3_2808398950_international_feet() -> None:
    # NGS slides on the two feet
    metre = Length.parse("1", M)
    assert metre.shown(US, 9) == "3.280833333"
    assert metre.shown(FT, 9) == "3.280839895"


def test_two_million_survey_feet_are_four_feet_longer() -> None:
    # ratio 500000/499999, by algebra from the two definitions
    assert US.metres_per_unit / FT.metres_per_unit == Fraction(500000, 499999)
    assert Length.parse("2000000", US).shown(FT, 6) == "2000004.000008"


def test_a_mile_differs_by_a_hundredth_of_a_foot_between_the_feet() -> None:
    # by algebra from the two definitions; exact to the nanometre kept
    mile = Length.parse("5280", US).in_unit(FT) - 5280
    assert float(mile) == pytest.approx(0.01056002, abs=2e-9)


def test_feet_inches_and_sixteenths_are_whole_nanometres() -> None:
    # by fractions: 151 5/16 inches of 25.4 mm
    assert Length.parse("12'-7 5/16\"", FT).nanometres == 3_843_337_500


@pytest.mark.parametrize(
    ("text", "feet"),
    [
        ("12' 7\"", Fraction(151, 12)),
        ("12'7\"", Fraction(151, 12)),
        ("12′ 7″", Fraction(151, 12)),
        ("12'-7''", Fraction(151, 12)),
        ("-12'-7\"", Fraction(-151, 12)),
        ("−3'", Fraction(-3)),
        ("12.5'", Fraction(25, 2)),
        ('7 5/16"', Fraction(117, 192)),
        ('5/16"', Fraction(5, 192)),
        ("0'-0 1/2\"", Fraction(1, 24)),
        ("1' 6.5\"", Fraction(37, 24)),
        ("+.5", Fraction(1, 2)),
        ("5.", Fraction(5)),
        (" 12.34 ", Fraction(617, 50)),
        ("1200 ft", Fraction(1200)),
        ("0.3048 m", Fraction(1)),
    ],
)
def test_a_length_is_read_as_it_is_written(text: str, feet: Fraction) -> None:
    assert Length.parse(text, FT).in_unit(FT) == feet


def test_a_unit_behind_the_number_overrides_the_job() -> None:
    assert Length.parse("3937 ftUS", M).nanometres == 1_200_000_000_000
    assert Length.parse("1 ft", US).unit is FT
    assert Length.parse("12' 6\" ftUS", FT).unit is US


def test_feet_and_inches_in_a_metre_job_are_international_feet() -> None:
    assert Length.parse("10'", M) == Length.parse("3.048", M)
    assert Length.parse("10'", M).unit is FT


def test_a_comma_is_a_decimal_mark_only_where_the_caller_says_so() -> None:
    assert Length.parse("12,34", M, decimal_comma=True) == Length.parse("12.34", M)
    with pytest.raises(NotReadable, match="thousands separator"):
        Length.parse("12,34", M)
    with pytest.raises(NotReadable, match="comma"):
        Length.parse("12.34", M, decimal_comma=True)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("1,234.5", "thousands separator"),
        ("1 234.5", "thousands separator"),
        ("1_234", "thousands separator"),
        ("1'234.5", "inch mark"),
        ("1.234.5", "more than one decimal mark"),
        ("1e3", "exponent"),
        ("1e500", "exponent"),
        ("", "empty"),
        ("   ", "empty"),
        ("abc", "not a number"),
        ("nan", "not a number"),
        ("inf", "not a number"),
        ("--5", "not a number"),
        ("12 in", "not a number"),
        ("12.34 mm", "not a number"),
        ("12' 7", "inch mark"),
        ("12' 12\"", "12 or more inches"),
        ("12.5' 6\"", "must be whole"),
        ("12' 7 5/10\"", "fraction"),
        ("12' 7 16/16\"", "fraction"),
        ("12' 7 5/0\"", "fraction"),
        ("12' 7\" m", "mixes"),
        ("٣", "not a number"),
    ],
)
def test_what_cannot_be_read_without_guessing_is_refused(text: str, says: str) -> None:
    with pytest.raises(NotReadable, match=says) as refusal:
        Length.parse(text, FT)
    assert refusal.value.do


def test_endless_digits_are_refused_at_once() -> None:
    started = perf_counter()
    for text in ("9" * 1_000_000, "1e" + "9" * 1_000_000, "1'" * 500_000):
        with pytest.raises(NotReadable, match="too long"):
            Length.parse(text, FT)
    assert perf_counter() - started < 0.5


def test_a_length_larger_than_the_earth_is_refused() -> None:
    with pytest.raises(OutOfRange):
        Length.parse("9" * 30, FT)
    with pytest.raises(OutOfRange):
        Length.from_metres(1e300, FT, 3)
    with pytest.raises(NotFinite):
        Length.from_metres(float("nan"), FT, 3)


def test_halves_round_away_from_zero() -> None:
    assert Length.parse("2.5", M).shown(M, 0) == "3"
    assert Length.parse("-2.5", M).shown(M, 0) == "-3"
    assert Length.parse("-0.125", M).shown(M, 2) == "-0.13"


def test_what_rounds_to_zero_has_no_sign() -> None:
    assert Length.parse("-0.004", FT).shown(FT, 2) == "0.00"
    assert Length.parse("-0", FT).shown(FT, 2) == "0.00"


def test_lengths_compare_by_nanometres_and_not_by_text() -> None:
    assert Length.parse("12' 6\"", FT) == Length.parse("3.81", M)
    assert len({Length.parse("1.0", M), Length.parse("1.00", M)}) == 1
    assert Length.parse("1", FT) < Length.parse("1", M)


def test_sum_and_difference_are_whole_nanometres() -> None:
    a, b = Length.parse("0.1", M), Length.parse("0.2", M)
    assert a.plus(b).text == "0.3"
    assert a.minus(b).nanometres == -100_000_000
    assert Length.parse("10", US).minus(Length.parse("10", US)).text == "0"


def test_a_computed_length_says_all_it_holds() -> None:
    length = Length.from_metres(123.456789, FT, 3)
    assert length == Length.parse(length.text, FT)
    assert Length.from_metres(-1e-9, FT, 3).text == "0.000"


def test_given_nanometres_are_kept_whole_beside_a_shorter_text() -> None:
    length = Length.from_nanometres(3_843_337_500, FT, 2)
    assert (length.text, length.nanometres) == ("12.61", 3_843_337_500)


@given(
    st.decimals(min_value=-(10**6), max_value=10**6, places=6),
    st.sampled_from(Unit),
)
def test_six_decimals_come_back_as_they_were_entered(
    value: Decimal, unit: Unit
) -> None:
    length = Length.parse(f"{value:f}", unit)
    assert length.shown(unit, 6) == f"{value + 0:.6f}".replace("-0.000000", "0.000000")


@given(
    st.decimals(min_value=-(10**6), max_value=10**6, places=5), st.sampled_from(Unit)
)
def test_rounding_agrees_with_decimal_arithmetic(value: Decimal, unit: Unit) -> None:
    shown = Length.parse(f"{value:f}", unit).shown(unit, 2)
    expected = value.quantize(Decimal("0.01"), ROUND_HALF_UP)
    assert Decimal(shown) == expected


@given(st.integers(-(10**16), 10**16), st.integers(-(10**16), 10**16))
def test_adding_and_taking_away_again_changes_nothing(a: int, b: int) -> None:
    first, second = Length("", FT, a), Length("", US, b)
    there = first.plus(second)
    assert there.minus(second).nanometres == a
    assert Length.parse(there.text, FT).nanometres == there.nanometres


@given(st.text(max_size=60), st.sampled_from(Unit), st.booleans())
def test_any_text_is_a_length_or_a_refusal(text: str, unit: Unit, comma: bool) -> None:
    try:
        length = Length.parse(text, unit, decimal_comma=comma)
    except GeometryError as refusal:
        assert refusal.what
    else:
        assert isinstance(length.nanometres, int)


@given(st.text(alphabet="0123456789'\" -/.,mftUS+", max_size=20), st.sampled_from(Unit))
def test_nearly_right_texts_are_a_length_or_a_refusal(text: str, unit: Unit) -> None:
    try:
        Length.parse(text, unit)
    except GeometryError as refusal:
        assert refusal.do
