"""Checks by their forms: each sort made, and explained by its page."""

from __future__ import annotations

import pytest

from stakes.models import Check
from tests.pages.crew import Field, put, text

CHECKS: dict[str, dict[str, str]] = {
    "distance": {"mark1": "101", "mark2": "102", "measured": "40.005"},
    "diagonal": {"mark1": "101", "mark2": "103", "measured": "72.11"},
    "angle": {"mark1": "101", "mark2": "102", "mark3": "104", "angle": "90-00-05"},
    "position": {"mark1": "101", "northing": "1080.01", "easting": "2080.00"},
    "elevation": {"mark1": "101", "measured": "499.575"},
    "line": {"mark1": "102", "mark2": "101", "mark3": "CP2", "measured": "0.0"},
    "fit": {
        "mark1": "101",
        "measured": "25.00",
        "by_sheet": "25.01",
        "against": "curb, C-3",
        "existing": "yes",
    },
}


@pytest.mark.parametrize("sort", CHECKS)
def test_each_sort_of_check_is_made_and_explains_itself(
    ready: Field, sort: str
) -> None:
    put(ready, "101", "102", "103", "104")
    assert ready.get("checks/", mark=str(ready.marks["101"])).status_code == 200
    assert ready.get(f"checks/make/{sort}/").status_code == 200
    done = ready.post(f"checks/make/{sort}/", **CHECKS[sort])
    assert done.status_code == 303, text(done)
    page = text(ready.client.get(done.url))
    for word in ("Tolerance", "Uncertainty, 95 %", "Independence", "It cannot see"):
        assert word in page
    assert Check.objects.count() == 1


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"mark2": "nobody"}, "There is no mark nobody"),
        ({"mark2": "101"}, "named twice"),
        ({"measured": ""}, "This field is required"),
        ({"measured": "-nan"}, "cannot be read"),
        ({"method": "guess"}, "Select a valid choice"),
        ({"rise": "50"}, "differ more in height"),
        ({"temperature": "NaN"}, "Enter a number"),
        ({"temperature": "900"}, "less than or equal to 160"),
        ({"pull": "-3"}, "greater than or equal to 1"),
    ],
)
def test_odd_input_to_a_check_gets_a_sentence(
    ready: Field, sent: dict[str, str], sentence: str
) -> None:
    put(ready, "101", "102")
    head = ready.head
    answer = ready.post("checks/make/distance/", **{**CHECKS["distance"], **sent})
    assert answer.status_code == 422
    assert sentence in text(answer)
    assert ready.head == head
