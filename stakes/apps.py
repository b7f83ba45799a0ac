"""The stakes app: its triggers are put back after every migrate."""

from __future__ import annotations

from django.apps import AppConfig
from django.core.checks import register
from django.db.models.signals import post_migrate


class StakesConfig(AppConfig):
    name = "stakes"
    verbose_name = "Stakes"

    def ready(self) -> None:
        from stakes import folds, kinds  # noqa: F401  (they register themselves)
        from stakes.record import triggers

        post_migrate.connect(triggers.install_after_migrate, sender=self)
        register(triggers.missing_triggers_check, "database")
