"""Look at a record after a race: gapless, unforked, its tree and read models whole.

python -m tests.races.judge RECORD_NUMBER
"""

from __future__ import annotations

import itertools
import json
import sys

from tests.arena import start_django


def judged(number: str) -> dict[str, object]:
    from stakes.models import Record
    from stakes.record.folds import replay
    from stakes.record.proving import faults

    record = Record.objects.get(number=number)
    entries = list(record.entries.order_by("number"))
    return {
        "head": record.head,
        "keys": [str(e.key) for e in entries],
        "faults": faults(record),
        "in_time": all(
            a.recorded_at <= b.recorded_at for a, b in itertools.pairwise(entries)
        ),
        "replay": replay(record),
    }


if __name__ == "__main__":
    start_django()
    print(json.dumps(judged(sys.argv[1])))
