"""Who may correct the kinds of entry that jobs adds: whoever may say them."""

from __future__ import annotations

from stakes.actions.correcting import CORRECTED_BY, OWN_WORDS
from stakes.can import Can

_KINDS = {
    Can.TERMS: (
        "job described",
        "job closed",
        "job reopened",
        "unit and zone set",
        "frame set",
        "notice rule set",
        "re-stake terms set",
        "hold time set",
    ),
    Can.PLAN: ("tolerance classes set",),
    Can.SCHEDULE: ("visit planned", "visit cancelled"),
    Can.DECIDE: (
        "request made",
        "request accepted",
        "request declined",
        "request talked over",
        "request withdrawn",
        "request closed",
        "cost answered",
    ),
    Can.HAND_OVER: ("handed over", "handover answered"),
    Can.SEND_HOLD: ("hold sent", "hold lifted", "hold heard"),
}

_ANSWERS = ("cost answered", "handover answered", "hold heard", "request withdrawn")
"""What the other side said; the firm may not say it differently for them."""


def register() -> None:
    """Tell the one table of `stakes` about them."""
    for right, kinds in _KINDS.items():
        CORRECTED_BY.update(dict.fromkeys(kinds, right))
    OWN_WORDS.update(_ANSWERS)
