"""The jobs app: people, seats and jobs. Its kinds and folds register on start."""

from __future__ import annotations

from django.apps import AppConfig


class JobsConfig(AppConfig):
    name = "jobs"
    verbose_name = "Jobs"

    def ready(self) -> None:
        from jobs import folds, kinds  # noqa: F401  (they register themselves)
        from jobs.kinds.corrected_by import register
        from jobs.queries import days_cards, days_needing  # noqa: F401

        # Cards stand in the order they are added: what presses before what is agreed.
        from jobs.queries import cards  # noqa: F401  # isort: skip

        register()
