"""Every kind of entry of this package; importing it registers them all."""

from __future__ import annotations

from stakes.kinds import (
    cautions,
    checking,
    condition,
    control,
    correcting,
    importing,
    planning,
    setting,
    setups,
    sheets,
)

__all__ = [
    "cautions",
    "checking",
    "condition",
    "control",
    "correcting",
    "importing",
    "planning",
    "setting",
    "setups",
    "sheets",
]
