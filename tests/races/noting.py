"""Workers that note what they did in a file, slowly enough to be killed meanwhile.

python -m tests.races.noting ask FILE COUNT      ask for so many notes
python -m tests.races.noting work FILE SECONDS   do them, each taking so long
python -m tests.races.noting left                how many are not done
"""

from __future__ import annotations

import sys
import time
from datetime import timedelta

from tests.arena import start_django


def register(seconds: float) -> None:
    from jobs.work import does

    @does("note")
    def note(file: str, what: str) -> None:
        with open(file, "a") as notes:
            notes.write(f"begun {what}\n")
        time.sleep(seconds)
        with open(file, "a") as notes:
            notes.write(f"done {what}\n")


def main() -> None:
    start_django()
    from jobs.models import Work
    from jobs.work import ask, doing, sweep

    match sys.argv[1:]:
        case ["ask", file, count]:
            for number in range(int(count)):
                ask("note", f"note {number}", file=file, what=str(number))
        case ["work", file, seconds]:
            doing.LEASE = timedelta(seconds=3)
            register(float(seconds))
            print("ready", flush=True)
            while Work.objects.filter(done_at=None).exists():
                if not sweep():
                    time.sleep(0.2)
        case ["left"]:
            print(Work.objects.filter(done_at=None).count())


if __name__ == "__main__":
    main()
