"""Photos for those who read the record."""

from __future__ import annotations

from django.urls import path

from stakes.pages.field import photos

urlpatterns = [
    path(
        "photos/<str:sha256>/<slug:size>.jpg",
        photos.photo_of_record,
        name="photo-image",
    ),
]
