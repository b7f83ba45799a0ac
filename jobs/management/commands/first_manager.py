"""`manage.py first_manager`: the person who lets everybody else in."""

from __future__ import annotations

import getpass
import sys
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import transaction

from jobs.actions.people import add_company, add_person
from jobs.actions.sign_in import set_password
from jobs.models import Company, CompanyKind, FirmRole, User
from stakes.record import Refused


class Command(BaseCommand):
    help = (
        "Make the firm and its first manager. The password is asked for, or read as "
        "one line when the command is not run by hand."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--email", required=True)
        parser.add_argument("--name", required=True)
        parser.add_argument(
            "--surveyor",
            action="store_true",
            help="they are also the licensed surveyor, as in a firm of one or two",
        )

    def handle(self, *args: Any, **options: Any) -> None:
        managing = [FirmRole.MANAGER, FirmRole.PRINCIPAL]
        if User.objects.filter(firm_role__in=managing, is_active=True).exists():
            raise CommandError("The firm has a manager, who can add others.")
        password = _asked_twice() if sys.stdin.isatty() else sys.stdin.readline()
        role = FirmRole.PRINCIPAL if options["surveyor"] else FirmRole.MANAGER
        try:
            with transaction.atomic():
                firm = _firm()
                person = add_person(
                    email=options["email"],
                    name=options["name"],
                    company=firm,
                    firm_role=role,
                )
                set_password(person=person, password=password.rstrip("\r\n"))
        except Refused as refused:
            raise CommandError(str(refused)) from refused
        self.stdout.write(f"{person.name} can sign in as {person.email}.")


def _firm() -> Company:
    firm = Company.objects.filter(kind=CompanyKind.FIRM).first()
    return firm or add_company(name=settings.FIRM, kind=CompanyKind.FIRM)


def _asked_twice() -> str:
    first = getpass.getpass("Password: ")
    if getpass.getpass("The same again: ") != first:
        raise CommandError("The two differ. Nothing was made.")
    return first
