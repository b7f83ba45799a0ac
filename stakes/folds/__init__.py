"""Folds of this package: from entries to the rows pages read. They register themselves."""

from __future__ import annotations

from stakes.folds import marks, plan, setups

__all__ = ["marks", "plan", "setups"]
