"""One process of writers: threads that append to one record, each entry acknowledged.

    python -m tests.races.writers RECORD_NUMBER PROCESS THREADS APPENDS

Prints the key of every entry whose append has returned, as soon as it has.
"""

from __future__ import annotations

import sys
import threading
import uuid

from tests.arena import start_django


def write(number: str, name: str, count: int, failed: list[str]) -> None:
    from django.db import connection

    from stakes.kinds.condition import MarksGone
    from stakes.models import Record
    from stakes.record import By, Said, append

    record = Record.objects.get(number=number)
    by = By(person=name, name=name)
    try:
        for turn in range(count):
            said = Said(
                fact=MarksGone(listed=(uuid.uuid5(record.key, str(turn % 50)),)),
                key=uuid.uuid5(record.key, f"{name} {turn}"),
            )
            append(record, said, by=by)
            print(said.key, flush=True)
    except Exception as error:
        failed.append(f"{type(error).__name__}: {error}")
    finally:
        connection.close()


def main() -> int:
    start_django()
    number, process, threads, appends = sys.argv[1:]
    failed: list[str] = []
    running = [
        threading.Thread(
            target=write, args=(number, f"{process}-{i}", int(appends), failed)
        )
        for i in range(int(threads))
    ]
    for thread in running:
        thread.start()
    for thread in running:
        thread.join()
    for trouble in failed:
        print("FAILED", trouble, flush=True)
    return 1 if failed else 0


if __name__ == "__main__":
    raise SystemExit(main())
