"""Celery, when LATHBOOK_BROKER_URL names a broker: it only wakes the sweep.

celery -A jobs.config.celery worker --beat
"""

from __future__ import annotations

import logging
import os

from celery import Celery

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "jobs.config.settings")
app = Celery("lathbook")


@app.on_after_configure.connect
def _each_minute(sender: Celery, **_: object) -> None:
    sender.add_periodic_task(60.0, work_due.s(), name="sweep")


def _configure() -> None:
    from django.conf import settings

    app.conf.update(
        broker_url=settings.BROKER_URL or "memory://",
        task_ignore_result=True,
        task_serializer="json",
        accept_content=["json"],
        worker_hijack_root_logger=False,
        broker_connection_retry_on_startup=True,
        broker_transport_options={"visibility_timeout": 600},
        beat_schedule_filename=str(settings.DATA_DIR / "beat-schedule"),
        timezone="UTC",
    )


_configure()


@app.task(name="lathbook.work_due")
def work_due() -> int:
    """Do what is due. The same function the embedded worker calls."""
    from django import setup
    from django.apps import apps

    if not apps.ready:
        setup()
    from jobs.work import sweep

    return sweep()


def wake() -> None:
    """Wake a worker; a broker that is away costs the wait until the next sweep."""
    try:
        work_due.apply_async(retry=False, ignore_result=True)
    except Exception as error:
        logging.getLogger("lathbook.work").warning("The broker is away: %s", error)
