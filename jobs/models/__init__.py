"""Tables of jobs: people and tokens; jobs, seats and terms folded from the record."""

from __future__ import annotations

from jobs.models.days import Handover, Hold, Request, Visit
from jobs.models.job import Job, Term
from jobs.models.notice import Notice
from jobs.models.people import Company, CompanyKind, Crew, FirmRole, FirmSpell, User
from jobs.models.seats import Seat
from jobs.models.sign_in import Outcome, SignInAttempt, Token
from jobs.models.tray import TrayItem
from jobs.models.work import Position, Work

__all__ = [
    "Company",
    "CompanyKind",
    "Crew",
    "FirmRole",
    "FirmSpell",
    "Handover",
    "Hold",
    "Job",
    "Notice",
    "Outcome",
    "Position",
    "Request",
    "Seat",
    "SignInAttempt",
    "Term",
    "Token",
    "TrayItem",
    "User",
    "Visit",
    "Work",
]
