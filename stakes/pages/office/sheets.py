"""Sheets received and read, questions to the designer, verbal directions."""

from __future__ import annotations

import uuid
from collections.abc import Callable
from typing import Any

from django import forms
from django.http import FileResponse, Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from stakes.actions.questions import (
    answer_question,
    ask_question,
    give_direction,
    settle_direction,
)
from stakes.actions.retiring import supersede_marks
from stakes.actions.sheets import file_of, read_sheet, receive_sheet
from stakes.can import Asked, Can, needs
from stakes.forms.office.sheets import (
    AnswerForm,
    DirectionForm,
    QuestionForm,
    ReadForm,
    SettleForm,
    SheetForm,
    SupersedeForm,
)
from stakes.models import Direction, Question, Sheet
from stakes.pages.answer import act
from stakes.queries.sheets import held, moved_with, settled, sheet_lines


@needs(Can.READ_RECORD)
def sheets(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    lines = sheet_lines(record)
    questions, directions = held(record)
    answered, done = settled(record)
    context = {
        "lines": lines,
        "waiting": [line for line in lines if line.waits],
        "questions": questions,
        "directions": directions,
        "answered": answered,
        "settled": done,
    }
    return render(request, "stakes/office/sheets.html", context)


@needs(Can.READ_RECORD)
def sheet(request: HttpRequest, job: str, sheet: uuid.UUID) -> HttpResponse:
    lines = {line.sheet.key: line for line in sheet_lines(request.asked.record)}
    if sheet not in lines:
        raise Http404
    context = {
        "line": lines[sheet],
        "sheet": lines[sheet].sheet,
        "moved": moved_with(request.asked.record, sheet),
    }
    return render(request, "stakes/office/sheet.html", context)


@needs(Can.READ_RECORD)
def sheet_file(request: HttpRequest, job: str, sheet: uuid.UUID) -> HttpResponse:
    row = _one(Sheet, request.asked, sheet)
    if not row.file_sha256 or not file_of(row.file_sha256).exists():
        raise Http404
    # Never shown in place: a file from outside must not run as a page of this house.
    return FileResponse(
        file_of(row.file_sha256).open("rb"),
        as_attachment=True,
        filename=f"{row.sheet_number}-{row.revision}",
        content_type="application/octet-stream",
    )


@needs(Can.PLAN)
def sheet_add(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    form = SheetForm(_sent(request), request.FILES or None, record=asked.record)

    def do() -> str:
        key = receive_sheet(record=asked.record, by=asked.by, **form.said())
        return reverse("stakes:sheet", kwargs={"job": job, "sheet": key})

    return _form(
        request,
        form,
        do,
        title="Receive a sheet",
        lead="A drawing, a file, a sketch or a written answer.",
        verb="Received",
        done="Received. Somebody reads it next.",
    )


@needs(Can.PLAN)
def sheet_read(request: HttpRequest, job: str, sheet: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    row = _one(Sheet, asked, sheet)
    form = ReadForm(_sent(request), record=asked.record)

    def do() -> str:
        read_sheet(record=asked.record, sheet=sheet, by=asked.by, **form.cleaned_data)
        return reverse("stakes:sheet", kwargs={"job": job, "sheet": sheet})

    return _form(
        request,
        form,
        do,
        title=f"Read {row}",
        lead="Which marks does it touch? They wait until the plan is issued from it.",
        verb="I read it",
        done="Noted who read it.",
    )


@needs(Can.ISSUE)
def sheet_supersede(request: HttpRequest, job: str, sheet: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    row = _one(Sheet, asked, sheet)
    lines = {line.sheet.key: line for line in sheet_lines(asked.record)}
    touched = ", ".join(label for _, label in lines[sheet].marks)
    form = SupersedeForm(
        _sent(request), record=asked.record, initial={"marks": touched}
    )

    def do() -> str:
        supersede_marks(
            record=asked.record, sheet=sheet, by=asked.by, **form.cleaned_data
        )
        return reverse("stakes:sheet", kwargs={"job": job, "sheet": sheet})

    return _form(
        request,
        form,
        do,
        title=f"What {row} takes away",
        lead="Stakes that still stand and no longer mark the design. They become tasks "
        "to be pulled; marks that only moved are issued again instead.",
        verb="They are superseded",
        done="Superseded. The stakes are to be pulled.",
    )


@needs(Can.PLAN)
def question_ask(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    form = QuestionForm(_sent(request), record=asked.record)

    def do() -> str:
        ask_question(record=asked.record, by=asked.by, **form.said())
        return _sheets_url(asked)

    return _form(
        request,
        form,
        do,
        title="Question to the designer",
        lead="A conflict or a missing dimension. What it holds is not staked until it "
        "is answered; nobody here supplies a dimension that is the designer's.",
        verb="Ask it",
        done="Asked. Its marks are held.",
    )


@needs(Can.PLAN)
def question_answer(
    request: HttpRequest, job: str, question: uuid.UUID
) -> HttpResponse:
    asked: Asked = request.asked
    row = _one(Question, asked, question)
    form = AnswerForm(_sent(request), record=asked.record)

    def do() -> str:
        answer_question(
            record=asked.record, question=question, by=asked.by, **form.said()
        )
        return _sheets_url(asked)

    return _form(
        request,
        form,
        do,
        title="Answer of the designer",
        lead=row.words,
        verb="Record the answer",
        done="Answered. Its marks are free again.",
    )


@needs(Can.RECORD, Can.READ_RECORD)
def direction_give(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    form = DirectionForm(_sent(request), record=asked.record)

    def do() -> str:
        give_direction(record=asked.record, by=asked.by, **form.cleaned_data)
        return _sheets_url(asked)

    return _form(
        request,
        form,
        do,
        title="Verbal direction",
        lead="A change by word of mouth. Its marks are held until it is confirmed in "
        "writing.",
        verb="Record it",
        done="Recorded. Its marks are held until it is confirmed.",
    )


@needs(Can.PLAN)
def direction_settle(
    request: HttpRequest, job: str, direction: uuid.UUID
) -> HttpResponse:
    asked: Asked = request.asked
    row = _one(Direction, asked, direction)
    form = SettleForm(_sent(request), record=asked.record)

    def do() -> str:
        settle_direction(
            record=asked.record, direction=direction, by=asked.by, **form.said()
        )
        return _sheets_url(asked)

    return _form(
        request,
        form,
        do,
        title="Settle a verbal direction",
        lead=f"{row.by_whom} to {row.to_whom}: {row.words}",
        verb="Settle it",
        done="Settled. Its marks are free again.",
    )


def _sent(request: HttpRequest) -> Any:
    return request.POST if request.method == "POST" else None


def _one(model: Any, asked: Asked, key: uuid.UUID) -> Any:
    row = model.objects.filter(record=asked.record, key=key).first()
    if row is None:
        raise Http404
    return row


def _sheets_url(asked: Asked) -> str:
    return reverse("stakes:sheets", kwargs={"job": asked.record.number})


def _form(
    request: HttpRequest, form: forms.Form, do: Callable[[], str], **context: Any
) -> HttpResponse:
    back = _sheets_url(request.asked)
    return act(request, form, "stakes/office/form.html", do, back=back, **context)
