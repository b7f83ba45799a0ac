"""What is hashed is RFC 8785, with the library `rfc8785` as the oracle."""

from __future__ import annotations

from datetime import UTC, datetime

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st

from stakes.record.canonical import canonical, moment_of, moment_text

texts = st.text(st.characters(exclude_categories=["Cs"]))
keys = st.text(st.characters(max_codepoint=126, min_codepoint=32), max_size=8)
integers = st.integers(-(2**53) + 1, 2**53 - 1)
values = st.recursive(
    st.none() | st.booleans() | integers | texts,
    lambda inner: (
        st.lists(inner, max_size=4) | st.dictionaries(keys, inner, max_size=4)
    ),
    max_leaves=20,
)


@given(values)
def test_the_bytes_are_those_of_the_reference_library(value) -> None:
    assert canonical(value) == rfc8785.dumps(value)


@pytest.mark.parametrize(
    "value", [1.0, float("nan"), {"a": 0.1}, 2**53, {1: "a"}, {"é": 1}]
)
def test_what_has_no_exact_form_has_no_place_in_the_record(value) -> None:
    with pytest.raises(ValueError):
        canonical(value)


def test_a_moment_is_always_written_with_six_decimals() -> None:
    assert moment_text(datetime(2026, 3, 2, 14, 0, tzinfo=UTC)) == (
        "2026-03-02T14:00:00.000000Z"
    )


@given(st.datetimes(timezones=st.just(UTC)))
def test_a_moment_comes_back_from_its_text(moment) -> None:
    assert moment_of(moment_text(moment)) == moment
