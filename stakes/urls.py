"""Addresses under one job: plan, marks, control, setups, record."""

from __future__ import annotations

from django.urls import URLPattern, URLResolver

app_name = "stakes"
urlpatterns: list[URLPattern | URLResolver] = []
