"""The top of the house: once everything is loaded, the packages are put together."""

from __future__ import annotations

from django.apps import AppConfig


class HouseConfig(AppConfig):
    name = "jobs.config"
    label = "config"
    verbose_name = "House"

    def ready(self) -> None:
        from jobs.config.registry import hand_down

        hand_down()
