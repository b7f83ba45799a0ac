"""Kinds of entry that jobs adds to the record; importing registers them."""

from __future__ import annotations

from jobs.kinds import handovers, holds, opening, requests, seats, terms, visits

__all__ = ["handovers", "holds", "opening", "requests", "seats", "terms", "visits"]
