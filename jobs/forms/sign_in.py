"""Forms of the account: sign in, passwords, tokens."""

from __future__ import annotations

from typing import Any

from django import forms


def _password(label: str, autocomplete: str, **more: Any) -> forms.CharField:
    return forms.CharField(
        label=label,
        strip=False,
        max_length=1000,
        widget=forms.PasswordInput(attrs={"autocomplete": autocomplete}),
        **more,
    )


class SignInForm(forms.Form):
    email = forms.CharField(
        label="E-mail",
        max_length=254,
        widget=forms.EmailInput(attrs={"autocomplete": "username", "autofocus": True}),
    )
    password = _password("Password", "current-password")
    next = forms.CharField(required=False, widget=forms.HiddenInput)


class NewPasswordForm(forms.Form):
    password = _password(
        "New password",
        "new-password",
        help_text="At least 10 characters; a sentence of your own is best.",
    )
    again = _password("The same again", "new-password")

    def clean(self) -> dict[str, Any]:
        said = super().clean() or {}
        if said.get("password") and said.get("again") != said["password"]:
            self.add_error("again", "The two differ. Type the same password twice.")
        return said


class ChangePasswordForm(NewPasswordForm):
    current = _password("Your password now", "current-password")
    field_order = ["current", "password", "again"]


class TokenForm(forms.Form):
    name = forms.CharField(
        label="What will use it",
        max_length=60,
        help_text="A program or device, for instance: office spreadsheet.",
    )
