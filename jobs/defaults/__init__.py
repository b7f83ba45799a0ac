"""What a new job starts with until its contract says otherwise; all of it editable."""

from __future__ import annotations

from jobs.defaults.payers import default_payers
from jobs.defaults.tolerances import default_classes

__all__ = ["HOLD_MINUTES", "default_classes", "default_payers"]

HOLD_MINUTES = 30
"""How long a proposed hold waits for the surveyor."""
