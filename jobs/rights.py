"""Who may do what on a job: one table, from role to rights, and nothing beside it.

A seat may carry several roles; its rights are their union, with what was granted to it
by name. The firm's managers and surveyors have a seat on every job.
"""

from __future__ import annotations

from collections.abc import Iterable
from enum import StrEnum

from jobs.models.people import CompanyKind, FirmRole
from stakes.can import Can


class Role(StrEnum):
    """What somebody is on one job."""

    MANAGER = "manager"
    SURVEYOR = "surveyor"
    PARTY_CHIEF = "party chief"
    CREW = "crew"
    CONTRACTOR = "contractor"
    INSPECTOR = "inspector"
    AUDITOR = "auditor"
    SUBCONTRACTED = "subcontracted crew"


_SEES = {Can.READ, Can.SEE_VISITS, Can.SEE_HOLDS}
_CREW = _SEES | {Can.READ_RECORD, Can.RECORD, Can.REPORT_LOSS}
_OFFICE = _CREW | {
    Can.PLAN,
    Can.REQUEST,  # takes down what was asked by telephone
    Can.DECIDE,
    Can.HAND_OVER,
    Can.SEE_PRICES,
    Can.EXPORT,
}

RIGHTS: dict[Role, frozenset[Can]] = {
    Role.MANAGER: frozenset(_OFFICE | {Can.SCHEDULE, Can.SEATS, Can.TERMS}),
    Role.SURVEYOR: frozenset(
        _OFFICE | {Can.ISSUE, Can.ADOPT, Can.PASS_GATE, Can.SEND_HOLD}
    ),
    Role.PARTY_CHIEF: frozenset(_CREW | {Can.PROCEED_HELD, Can.HAND_OVER}),
    Role.CREW: frozenset(_CREW),
    Role.CONTRACTOR: frozenset(
        _SEES
        | {
            Can.REPORT_LOSS,
            Can.REQUEST,
            Can.ACCEPT_COST,
            Can.SIGN,
            Can.ACKNOWLEDGE,
            Can.SEE_PRICES,
            Can.EXPORT,
        }
    ),
    Role.INSPECTOR: frozenset(_SEES | {Can.SEE_PRICES, Can.ACCEPT_COST}),
    Role.AUDITOR: frozenset(_SEES | {Can.READ_RECORD, Can.EXPORT}),
    Role.SUBCONTRACTED: frozenset(_SEES | {Can.RECORD, Can.REPORT_LOSS}),
}
"""What a role may do. Pages show a contractor only what concerns their company."""

GRANTS: dict[Role, frozenset[Can]] = {
    Role.PARTY_CHIEF: frozenset({Can.ISSUE}),
    Role.AUDITOR: frozenset({Can.SEE_PRICES}),
}
"""What may be granted to one seat by name, dated and revocable with it."""

SEATED: dict[str, frozenset[Role]] = {
    CompanyKind.FIRM: frozenset(
        {Role.MANAGER, Role.SURVEYOR, Role.PARTY_CHIEF, Role.CREW, Role.AUDITOR}
    ),
    CompanyKind.GENERAL: frozenset({Role.CONTRACTOR, Role.AUDITOR}),
    CompanyKind.TRADE: frozenset({Role.CONTRACTOR, Role.AUDITOR}),
    CompanyKind.OWNER: frozenset({Role.INSPECTOR, Role.AUDITOR}),
    CompanyKind.SUBCONTRACTED: frozenset({Role.SUBCONTRACTED, Role.AUDITOR}),
}
"""Which roles the people of a kind of company may be given."""

OF_THE_FIRM: dict[str, frozenset[Role]] = {
    FirmRole.MANAGER: frozenset({Role.MANAGER}),
    FirmRole.SURVEYOR: frozenset({Role.SURVEYOR}),
    FirmRole.PRINCIPAL: frozenset({Role.MANAGER, Role.SURVEYOR}),
    FirmRole.CREW: frozenset(),
    FirmRole.NONE: frozenset(),
}
"""The seat the firm's office has on every job without being given one."""

INSIDERS = frozenset(
    {
        Role.MANAGER,
        Role.SURVEYOR,
        Role.PARTY_CHIEF,
        Role.CREW,
        Role.AUDITOR,
    }
)
"""Roles that see all companies of a job; the others see their own company's part."""


def rights_of(roles: Iterable[Role], granted: Iterable[str] = ()) -> frozenset[Can]:
    """The union of what the roles may do and what was granted to one of them."""
    held = frozenset(roles)
    own = {right for role in held for right in RIGHTS[role]}
    may_be_granted = {right for role in held for right in GRANTS.get(role, ())}
    return frozenset(own | ({Can(g) for g in granted} & may_be_granted))
