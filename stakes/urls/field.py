"""Addresses of a crew on a job; the only ones a phone keeps for use without a signal."""

from __future__ import annotations

from django.urls import path

from stakes.pages.field import (
    cautions,
    checking,
    found,
    home,
    photos,
    setting,
    setups,
)

app_name = "field"
urlpatterns = [
    path("", home.home, name="home"),
    path("several/", home.several, name="several"),
    path("marks/<uuid:mark>/", home.mark, name="mark"),
    path("marks/<uuid:mark>/label/", home.label, name="label"),
    path("marks/<uuid:mark>/set/", setting.set_page, name="set"),
    path("found/<slug:what>/", found.found, name="found"),
    path("foreign/", found.foreign, name="foreign"),
    path("setups/", setups.setups, name="setups"),
    path("setups/open/<slug:sort>/", setups.setup_open, name="setup-open"),
    path("setups/<uuid:setup>/", setups.setup, name="setup"),
    path("setups/<uuid:setup>/re-check/", setups.setup_recheck, name="setup-recheck"),
    path("setups/<uuid:setup>/close/", setups.setup_close, name="setup-close"),
    path("checks/", checking.check_choose, name="check-choose"),
    path("checks/make/<slug:sort>/", checking.check_make, name="check-make"),
    path("checks/<uuid:check>/", checking.check, name="check"),
    path("locates/", cautions.tickets, name="tickets"),
    path("locates/record/", cautions.ticket_record, name="ticket-record"),
    path("locates/<uuid:locate>/", cautions.ticket_record, name="ticket"),
    path("hazards/", cautions.hazards, name="hazards"),
    path("hazards/<uuid:hazard>/gone/", cautions.hazard_gone, name="hazard-gone"),
    path("held/", cautions.held, name="held"),
    path("photos/<str:sha256>/", photos.photo, name="photo"),
    path("photos/<str:sha256>/<slug:size>.jpg", photos.photo_image, name="photo-image"),
]
