"""A photo of this job, turned upright and shrunk; the file as received is kept."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse

from stakes.actions import photos
from stakes.can import Can, needs
from stakes.kinds.photos import photo_key
from stakes.models import EntryMatter, Record
from stakes.pages.field.where import page
from stakes.record import Counted, reading

SIDES = {"small": 320, "large": 1600}


@needs(Can.RECORD)
def photo(request: HttpRequest, job: str, sha256: str) -> HttpResponse:
    return page(
        request,
        "photo.html",
        sha256=sha256,
        entries=_entries(request.asked.record, sha256),
    )


@needs(Can.RECORD)
def photo_image(request: HttpRequest, job: str, sha256: str, size: str) -> HttpResponse:
    return image(request.asked.record, sha256, SIDES.get(size, SIDES["large"]))


@needs(Can.READ_RECORD)
def photo_of_record(
    request: HttpRequest, job: str, sha256: str, size: str
) -> HttpResponse:
    """The same for those who read the record and record nothing."""
    return image(request.asked.record, sha256, SIDES.get(size, SIDES["large"]))


def photos_of(record: Record, mark: UUID) -> list[tuple[str, Counted]]:
    """The photos that entries about a mark name, the latest first."""
    said = reading.entries(record, mark=mark)
    return [
        (sha256, counted)
        for counted in reversed(said)
        for sha256 in getattr(counted.fact, "photos", ())
    ]


def image(record: Record, sha256: str, side: int) -> HttpResponse:
    """The picture, for whoever may read the record that names it."""
    _of_this_job(record, sha256)
    try:
        data = photos.shown(sha256, side)
    except FileNotFoundError as error:
        raise Http404(
            "The record names this photo, but its file is not here."
        ) from error
    answer = HttpResponse(data, content_type="image/jpeg")
    # It can never change under its hash; but it is for one person's eyes.
    answer.headers["Cache-Control"] = "private, max-age=86400, immutable"
    return answer


def _entries(record: Record, sha256: str) -> list[Counted]:
    _of_this_job(record, sha256)
    return reading.entries(record, thing="photo", key=photo_key(sha256), all_said=True)


def _of_this_job(record: Record, sha256: str) -> None:
    """A hash alone opens nothing: an entry of this very job must name the photo."""
    try:
        photos.path_of(sha256)
    except ValueError as error:
        raise Http404("There is no such photo.") from error
    named = EntryMatter.objects.filter(
        record=record, thing="photo", key=photo_key(sha256)
    )
    if not named.exists():
        raise Http404("There is no such photo on this job.")
