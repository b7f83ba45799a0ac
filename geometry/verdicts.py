"""The words in which a computation answers; screens and the record use the same."""

from __future__ import annotations

from enum import StrEnum


class Verdict(StrEnum):
    """The outcome of comparing what was measured with what was computed."""

    PASS = "pass"
    FAIL = "fail"
    UNDECIDED = "undecided"
    AMBIGUOUS = "ambiguous"
    NOT_TESTED = "not tested"
