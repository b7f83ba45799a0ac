"""Photos are kept as received; what is no photo is refused with a sentence."""

from __future__ import annotations

import hashlib
import io

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from PIL import Image

from stakes.actions import photos
from stakes.record import Refused


@pytest.fixture(autouse=True)
def _folder(settings, tmp_path) -> None:
    settings.PHOTO_DIR = tmp_path / "photos"


def picture(kind: str = "JPEG", size: tuple[int, int] = (40, 20), **save) -> bytes:
    out = io.BytesIO()
    Image.new("RGB", size, (200, 30, 90)).save(out, kind, **save)
    return out.getvalue()


def upload(data: bytes, name: str = "hub.jpg") -> SimpleUploadedFile:
    return SimpleUploadedFile(name, data, "image/jpeg")


@pytest.mark.parametrize("kind", ["JPEG", "PNG", "WEBP"])
def test_a_photo_is_kept_byte_for_byte_under_its_hash(kind: str) -> None:
    data = picture(kind)
    sha256 = photos.keep(upload(data))
    assert sha256 == hashlib.sha256(data).hexdigest()
    assert photos.path_of(sha256).read_bytes() == data
    assert photos.keep(upload(data)) == sha256


def test_a_photo_is_shown_upright_and_shrunk_without_what_the_camera_wrote() -> None:
    exif = Image.Exif()
    exif[0x0112] = 6  # turned a quarter: EXIF orientation, from memory
    exif[0x010E] = "a place nobody asked for"
    sha256 = photos.keep(upload(picture(size=(4000, 2000), exif=exif)))
    out = photos.shown(sha256, side=600)
    with Image.open(io.BytesIO(out)) as image:
        assert image.size == (300, 600)
    assert b"nobody asked" not in out


@pytest.mark.parametrize(
    ("data", "word"),
    [
        (b"", "empty"),
        (b"<svg xmlns='http://www.w3.org/2000/svg'/>", "no JPEG"),
        (b"%PDF-1.7", "no JPEG"),
        (picture(size=(900, 900))[:-900], "damaged"),
        (picture("GIF"), "no JPEG"),
        (b"x" * (photos.MOST_BYTES + 1), "12 MB"),
    ],
)
def test_what_is_no_photo_is_refused_kindly_and_nothing_is_kept(data, word) -> None:
    with pytest.raises(Refused, match=word):
        photos.keep(upload(data))
    assert not list(photos.settings.PHOTO_DIR.rglob("*"))


def test_a_small_file_that_unpacks_into_too_many_pixels_is_refused(monkeypatch) -> None:
    monkeypatch.setattr(photos, "MOST_PIXELS", 50_000)
    data = picture("PNG", size=(900, 800))
    with pytest.raises(Refused, match="million pixels"):
        photos.keep(upload(data))


def test_a_name_that_is_no_hash_reaches_no_file() -> None:
    for name in ("../secret", "g" * 64, "", "A" * 64):
        with pytest.raises(ValueError):
            photos.path_of(name)


def test_more_photos_than_a_form_carries_are_refused() -> None:
    with pytest.raises(Refused, match="at most 6"):
        photos.keep_all([upload(picture())] * 7)
