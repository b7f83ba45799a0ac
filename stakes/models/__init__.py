"""Tables of stakes: the record (only grows) and the read models (rebuilt at will)."""

from __future__ import annotations

from stakes.models.chain import MarkChain
from stakes.models.drafts import Draft
from stakes.models.mark import Mark, Stake
from stakes.models.plan import Check, Direction, Question, Sheet, Zone
from stakes.models.record import (
    Entry,
    EntryMark,
    EntryMatter,
    PrivatePart,
    Record,
    TreeNode,
)
from stakes.models.setup import Setup

__all__ = [
    "Check",
    "Direction",
    "Draft",
    "Entry",
    "EntryMark",
    "EntryMatter",
    "Mark",
    "MarkChain",
    "PrivatePart",
    "Question",
    "Record",
    "Setup",
    "Sheet",
    "Stake",
    "TreeNode",
    "Zone",
]
