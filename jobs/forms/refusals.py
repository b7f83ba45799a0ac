"""Showing what an action refused beside the question it belongs to."""

from __future__ import annotations

from django import forms

from stakes.record import Refused


def show(form: forms.BaseForm, refused: Refused) -> None:
    """Put the sentence by its field; above the form when the form has no such field."""
    field = refused.field if refused.field in form.fields else None
    form.add_error(field, str(refused))
