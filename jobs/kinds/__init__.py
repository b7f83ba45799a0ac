"""Kinds of entry that jobs adds to the record; importing registers them."""

from __future__ import annotations

from jobs.kinds import opening, seats, terms

__all__ = ["opening", "seats", "terms"]
