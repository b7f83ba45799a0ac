"""Who usually pays to set stakes again. Causes are facts; none of them names a fault."""

from __future__ import annotations

from jobs.kinds.terms import Payer

CONTRACTOR = "contractor"
OWNER = "owner"
THAT_PARTY = "the party that caused it"
SURVEYOR = "survey firm, no charge"
CASE_BY_CASE = "decided case by case"
DISTURBER = "whoever disturbed it"

PAYERS = (CONTRACTOR, OWNER, THAT_PARTY, SURVEYOR, CASE_BY_CASE, DISTURBER)

_USUAL = (
    ("contractor's operations", CONTRACTOR, False),
    ("grades not transferred in time", CONTRACTOR, False),
    ("design change or plan error", OWNER, True),
    ("owner's people or another direct contractor", THAT_PARTY, True),
    ("third party or not known", CASE_BY_CASE, True),
    ("surveyor's error", SURVEYOR, False),
    ("end of stage, ordinary wear or weather", CASE_BY_CASE, True),
    ("legal monument disturbed", DISTURBER, True),
)
"""Cause, usual payer, whether the cost is approved before the work (common practice)."""

CAUSES = tuple(cause for cause, _, _ in _USUAL)


def default_payers() -> tuple[Payer, ...]:
    """The usual allocation, to be confirmed per contract."""
    return tuple(
        Payer(cause=cause, payer=payer, approval=approval)
        for cause, payer, approval in _USUAL
    )
