"""Read models of jobs, folded from the record; importing registers the folds."""

from __future__ import annotations

from jobs.folds import days, jobs, seats, terms

__all__ = ["days", "jobs", "seats", "terms"]
