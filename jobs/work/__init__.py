"""What is done after a commit: asked for in the same transaction, claimed by a lease.

    from jobs.work import ask, does

The database is the queue of record. A broker only wakes a worker sooner; when it loses
a message, or a worker is killed, the sweep finds the row again.
"""

from __future__ import annotations

from jobs.work.asking import ask
from jobs.work.doing import WORKERS, does, sweep

__all__ = ["WORKERS", "ask", "does", "sweep"]
