"""A crew in the field: a job, its marks, and a client signed in as party chief."""

from __future__ import annotations

import io
import re
import uuid
from dataclasses import dataclass
from typing import Any

from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client
from PIL import Image

from stakes.actions.setting import set_stake
from stakes.models import Record, Setup
from stakes.queries.state import job_state
from tests.builders import CHIEF, measured
from tests.fieldwork import Marks


@dataclass
class Field:
    """A job in the field and a client signed in as its party chief."""

    record: Record
    marks: Marks
    client: Client

    def url(self, tail: str = "") -> str:
        return f"/field/{self.record.number}/{tail}"

    def get(self, tail: str = "", **query: Any):
        return self.client.get(self.url(tail), query)

    def post(self, tail: str, **data: Any):
        return self.client.post(self.url(tail), {"key": str(uuid.uuid4()), **data})

    @property
    def head(self) -> int:
        return Record.objects.get(pk=self.record.pk).head

    def stake(self, label: str):
        return job_state(self.record).marks[self.marks[label]].stake


def text(response) -> str:
    return re.sub(r"\s+", " ", response.content.decode())


def setup_of(field: Field) -> str:
    return str(Setup.objects.get(record=field.record).key)


def put(field: Field, *labels: str) -> None:
    for label in labels:
        set_stake(
            record=field.record,
            mark=field.marks[label],
            setup=uuid.UUID(setup_of(field)),
            elevation=measured("499.57"),
            by=CHIEF,
        )


def photo() -> SimpleUploadedFile:
    out = io.BytesIO()
    Image.new("RGB", (60, 40), (9, 90, 40)).save(out, "JPEG")
    return SimpleUploadedFile("lost.jpg", out.getvalue(), "image/jpeg")
