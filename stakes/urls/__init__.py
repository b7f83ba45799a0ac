"""Addresses under one job, gathered from one file per area."""

from __future__ import annotations

from django.urls import URLPattern, URLResolver

from stakes.urls import job, office, photos, recovery

app_name = "stakes"
urlpatterns: list[URLPattern | URLResolver] = [
    *job.urlpatterns,
    *office.urlpatterns,
    *photos.urlpatterns,
    *recovery.urlpatterns,
]
