"""Which entries count: a direct reading of the rule is the oracle."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from stakes.record.counting import corrected, roots


@st.composite
def histories(draw: st.DrawFn) -> tuple[int, dict[int, int], set[int]]:
    """How many entries, which correct which, and which of those only withdraw."""
    size = draw(st.integers(1, 14))
    corrections = {
        n: draw(st.integers(1, n - 1))
        for n in range(2, size + 1)
        if draw(st.booleans())
    }
    withdrawals = {n for n in corrections if draw(st.booleans())}
    return size, corrections, withdrawals


@given(histories())
def test_of_one_original_at_most_one_entry_brings_facts_that_count(history) -> None:
    size, corrections, withdrawals = history
    overruled = corrected(corrections, withdrawals)
    places: dict[int, list[int]] = {}
    for number, root in roots(corrections, range(1, size + 1)).items():
        if number not in overruled and number not in withdrawals:
            places.setdefault(root, []).append(number)
    assert all(len(standing) == 1 for standing in places.values())


@given(histories())
def test_the_last_word_always_counts(history) -> None:
    size, corrections, withdrawals = history
    assert size not in corrected(corrections, withdrawals)


@given(histories())
def test_what_a_counting_entry_corrects_does_not_count(history) -> None:
    _, corrections, withdrawals = history
    overruled = corrected(corrections, withdrawals)
    for number, target in corrections.items():
        if number not in overruled:
            assert target in overruled


@given(histories(), st.integers(1, 14))
def test_known_up_to_k_is_the_history_cut_at_k(history, known) -> None:
    _, corrections, withdrawals = history
    cut = {n: t for n, t in corrections.items() if n <= known}
    assert corrected(corrections, withdrawals, known) == corrected(cut, withdrawals)


@given(histories())
def test_an_entry_nobody_ever_corrected_counts(history) -> None:
    size, corrections, withdrawals = history
    overruled = corrected(corrections, withdrawals)
    spoken_of = set(corrections.values()) | set(corrections)
    for number in set(range(1, size + 1)) - spoken_of:
        assert number not in overruled
