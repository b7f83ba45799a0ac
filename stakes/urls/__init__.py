"""Addresses under one job, gathered from one file per area."""

from __future__ import annotations

from django.urls import URLPattern, URLResolver

app_name = "stakes"
urlpatterns: list[URLPattern | URLResolver] = []
