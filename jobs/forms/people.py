"""Forms of people, companies and crews."""

from __future__ import annotations

from typing import Any

from django import forms

from jobs.models import Company, CompanyKind, Crew, FirmRole, User


class PersonForm(forms.Form):
    name = forms.CharField(label="Name", max_length=120)
    email = forms.EmailField(label="E-mail", help_text="They sign in by it.")
    firm_role = forms.ChoiceField(
        label="In the firm",
        choices=FirmRole.choices,
        initial=FirmRole.NONE,
        help_text="Managers and surveyors have a seat on every job. Crew and people of "
        "other companies get theirs job by job.",
    )
    initials = forms.CharField(
        label="Initials",
        max_length=6,
        required=False,
        help_text="As written on stakes.",
    )
    licence_number = forms.CharField(
        label="Licence number", max_length=40, required=False
    )
    phone = forms.CharField(label="Telephone", max_length=40, required=False)


class NewPersonForm(PersonForm):
    company = forms.ModelChoiceField(Company.objects.all(), label="Company")
    field_order = ["name", "email", "company"]


class CompanyForm(forms.Form):
    name = forms.CharField(label="Name", max_length=120)
    phone = forms.CharField(label="Telephone", max_length=40, required=False)


class NewCompanyForm(CompanyForm):
    kind = forms.ChoiceField(
        label="What it is on our jobs",
        choices=CompanyKind.choices,
        initial=CompanyKind.TRADE,
        help_text="It settles which seats its people can have, and does not change.",
    )
    field_order = ["name", "kind", "phone"]


class CrewForm(forms.Form):
    name = forms.CharField(label="Name", max_length=60)
    party_chief = forms.ModelChoiceField(User.objects.none(), label="Party chief")
    members = forms.ModelMultipleChoiceField(
        User.objects.none(),
        label="Members",
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )
    skills = forms.CharField(
        label="Skills",
        max_length=300,
        required=False,
        help_text="Separated by commas, for instance: levelling, satellite, anchor rods.",
    )

    def __init__(self, *args: Any, crew: Crew | None = None, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        outside = {CompanyKind.FIRM, CompanyKind.SUBCONTRACTED}
        people = User.objects.filter(is_active=True, company__kind__in=outside)
        if crew is not None:
            people = people.filter(company=crew.company_id)
        for field in ("party_chief", "members"):
            self.fields[field].queryset = people.select_related("company")
            self.fields[field].label_from_instance = _with_company

    def clean_skills(self) -> list[str]:
        return [s.strip() for s in self.cleaned_data["skills"].split(",") if s.strip()]


def _with_company(person: User) -> str:
    return f"{person.name} ({person.company.name})"
