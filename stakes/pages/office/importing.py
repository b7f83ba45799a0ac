"""Importing points: what the file cannot say, what is wrong with it, line by line."""

from __future__ import annotations

import hashlib
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render
from django.urls import reverse

from stakes.actions.importing import (
    ImportRefused,
    import_file,
    import_points,
    keep_import,
)
from stakes.can import Asked, Can, needs
from stakes.exchange.comma import MOST_BYTES
from stakes.forms.office.importing import ImportForm
from stakes.models import Draft
from stakes.pages.answer import refuse_on
from stakes.record import Refused

LINES_SHOWN = 200


@needs(Can.PLAN)
def points(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    sent = request.POST.copy() if request.method == "POST" else None
    form = ImportForm(sent, request.FILES or None, record=asked.record)
    context: dict[str, Any] = {"form": form}
    if sent is not None and form.is_valid():
        try:
            draft = _draft(asked, form)
        except ImportRefused as refused:
            form.add_error(None, str(refused))
            context |= _diagnosis(form, refused, sent)
        except Refused as refused:
            refuse_on(form, refused)
        else:
            messages.success(
                request, "Read into a draft. Look at what it would change."
            )
            address = reverse("stakes:draft", kwargs={"job": job, "draft": draft.key})
            return HttpResponseRedirect(address)
    status = 422 if form.errors else 200
    return render(request, "stakes/office/import.html", context, status=status)


def _draft(asked: Asked, form: ImportForm) -> Draft:
    data, name = _data(form)
    said = form.cleaned_data
    try:
        return import_points(
            record=asked.record,
            data=data,
            name=name,
            answers=form.answers(),
            sheet=form.sheet_key,
            title=said["title"],
            leave_out=said["leave_out"],
            doubts_seen=said["doubts_seen"],
            by=asked.by,
            key=said["key"],
        )
    except ImportRefused as refused:
        if not said["text"].strip():
            keep_import(data, refused.reading.sha256)
            form.kept_as = (refused.reading.sha256, name)
        raise


def _data(form: ImportForm) -> tuple[bytes, str]:
    """What was sent: the file, the pasted text, or the file sent the time before."""
    said = form.cleaned_data
    upload = said["file"]
    if upload:
        if upload.size > MOST_BYTES:
            raise Refused(
                f"{upload.name[:60]} has {upload.size >> 20} MB.",
                do=f"Send at most {MOST_BYTES >> 20} MB; cut larger files in parts.",
                field="file",
                code="too large",
            )
        return upload.read(), upload.name[:120]
    if said["text"].strip():
        return said["text"].encode(), ""
    path = import_file(said["kept"])
    if not path.exists():
        raise Refused(
            "The file sent before is no longer here.",
            do="Choose it again.",
            field="file",
        )
    data = path.read_bytes()
    if hashlib.sha256(data).hexdigest() != said["kept"]:
        raise Refused("The file kept is broken.", do="Choose it again.", field="file")
    return data, said["kept_name"]


def _diagnosis(form: ImportForm, refused: ImportRefused, sent: Any) -> dict[str, Any]:
    """What the page says of a file that cannot become a draft yet."""
    sent["kept"], sent["kept_name"] = form.kept_as
    grave = [c for c in refused.complaints if c.grave]
    mild = [c for c in refused.complaints if not c.grave]
    return {
        "reading": refused.reading,
        "doubts": refused.doubts,
        "grave": grave[:LINES_SHOWN],
        "mild": mild[:LINES_SHOWN],
        "more_grave": max(0, len(grave) - LINES_SHOWN),
        "more_mild": max(0, len(mild) - LINES_SHOWN) + refused.reading.more_complaints,
        "sample": refused.reading.rows[:5],
    }
