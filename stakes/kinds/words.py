"""The words of a fixed choice that several kinds share."""

from __future__ import annotations

from typing import Literal

Purpose = Literal["control", "benchmark", "stake", "foreign"]
Carries = Literal["both", "position", "elevation"]
Verdict = Literal["pass", "fail", "undecided", "not tested"]
Component = Literal["p", "e", "pe"]
OldStake = Literal["first", "pulled", "not found", "left and voided"]
Reach = Literal["shape", "place", "fit", "height"]

COMPONENTS: dict[str, str] = {"both": "pe", "position": "p", "elevation": "e"}
"""What a mark carries, as the letters of its effects."""
