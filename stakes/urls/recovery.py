"""Addresses of putting marks back."""

from __future__ import annotations

from django.urls import path

from stakes.pages import recovery

urlpatterns = [
    path("lost/", recovery.lost, name="lost"),
    path("marks/<uuid:mark>/ways/", recovery.ways_back, name="ways"),
    path("marks/<uuid:mark>/ways/<int:rank>/", recovery.put_back_page, name="put-back"),
]
