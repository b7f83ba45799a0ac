"""Photos: kept exactly as received, under their SHA-256; shown turned and shrunk.

A file that claims to be a picture is decoded before it is kept, in bounded size, so
that neither a mislabelled file nor one that unpacks into gigabytes gets in.
"""

from __future__ import annotations

import hashlib
import io
import os
import tempfile
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any, Protocol

from django.conf import settings
from PIL import Image, ImageOps, UnidentifiedImageError

from stakes.record import Refused

MOST_BYTES = 12 * 1024 * 1024
MOST_PIXELS = 60_000_000
FORMATS = {"JPEG": "jpg", "PNG": "png", "WEBP": "webp"}
MOST_AT_ONCE = 6


class Upload(Protocol):
    """What a form hands over for a file."""

    name: str | None
    size: int | None

    def read(self, size: int = -1, /) -> bytes: ...


def keep(upload: Upload) -> str:
    """Keep a photo as received; returns its SHA-256 in hex. Twice is harmless.

    Raises Refused when it is too large, empty, or no picture of a kind that is read.
    """
    name = (upload.name or "the file")[:60]
    if upload.size is not None and upload.size > MOST_BYTES:
        raise _refused(f"{name} is larger than 12 MB.", "Send it in a smaller size.")
    data = upload.read(MOST_BYTES + 1)
    if not data:
        raise _refused(f"{name} is empty.", "Take the photo again.")
    if len(data) > MOST_BYTES:
        raise _refused(f"{name} is larger than 12 MB.", "Send it in a smaller size.")
    _decoded(data, name)
    sha256 = hashlib.sha256(data).hexdigest()
    _write(path_of(sha256), data)
    return sha256


def keep_all(uploads: Any) -> tuple[str, ...]:
    """Keep several photos; refuses more than a form may carry."""
    listed = list(uploads)
    if len(listed) > MOST_AT_ONCE:
        raise _refused(
            f"{len(listed)} photos were sent with one entry.",
            f"Send at most {MOST_AT_ONCE}; the others with another entry.",
        )
    return tuple(dict.fromkeys(keep(upload) for upload in listed))


def path_of(sha256: str) -> Path:
    """Where the file with this SHA-256 is kept."""
    if len(sha256) != 64 or set(sha256) - set("0123456789abcdef"):
        raise ValueError("Not a SHA-256 in hex.")
    return Path(settings.PHOTO_DIR) / sha256[:2] / sha256


def shown(sha256: str, side: int = 1200) -> bytes:
    """The photo as a JPEG, turned upright, no side longer than `side`, without the
    particulars its camera wrote into it. Raises FileNotFoundError."""
    data = path_of(sha256).read_bytes()
    with _bounded(), Image.open(io.BytesIO(data), formats=tuple(FORMATS)) as image:
        image.draft("RGB", (side, side))
        upright = ImageOps.exif_transpose(image) or image
        upright.thumbnail((side, side))
        out = io.BytesIO()
        upright.convert("RGB").save(out, "JPEG", quality=82)
    return out.getvalue()


@contextmanager
def _bounded() -> Iterator[None]:
    """Pillow only warns of a picture that unpacks too large; here that is an error."""
    with warnings.catch_warnings():
        warnings.simplefilter("error", Image.DecompressionBombWarning)
        yield


def _decoded(data: bytes, name: str) -> None:
    try:
        with _bounded(), Image.open(io.BytesIO(data), formats=tuple(FORMATS)) as image:
            if image.width * image.height > MOST_PIXELS:
                raise _refused(
                    f"{name} has more than 60 million pixels.",
                    "Send it in a smaller size.",
                )
            image.load()
    except UnidentifiedImageError as error:
        raise _refused(
            f"{name} is no JPEG, PNG or WebP picture.",
            "Send a photo; keep other files with the sheets.",
        ) from error
    except (Image.DecompressionBombError, Image.DecompressionBombWarning) as error:
        raise _refused(
            f"{name} has more pixels than a photo.", "Send it in a smaller size."
        ) from error
    except (OSError, SyntaxError, ValueError) as error:
        raise _refused(
            f"{name} is damaged: it cannot be decoded to its end.",
            "Take or send the photo again.",
        ) from error


def _write(path: Path, data: bytes) -> None:
    """Whole or not at all: a half-written photo would stand under a hash it has not."""
    if path.exists():
        return
    path.parent.mkdir(parents=True, exist_ok=True)
    descriptor, temporary = tempfile.mkstemp(dir=path.parent)
    with os.fdopen(descriptor, "wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())
    os.replace(temporary, path)


def _refused(what: str, do: str) -> Refused:
    return Refused(what, do=do, field="photos", code="photo")
