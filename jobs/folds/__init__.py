"""Read models of jobs, folded from the record; importing registers the folds."""

from __future__ import annotations

from jobs.folds import jobs, seats, terms

__all__ = ["jobs", "seats", "terms"]
