"""Look at a record after a race: gapless, unforked, its tree and read models whole.

python -m tests.races.judge RECORD_NUMBER
"""

from __future__ import annotations

import itertools
import json
import sys

from tests.arena import start_django


def judged(number: str) -> dict[str, object]:
    from stakes.models import EntryMark, MarkChain, Record
    from stakes.record import merkle
    from stakes.record.append import FIRST_LINK
    from stakes.record.folds import replay

    record = Record.objects.get(number=number)
    entries = list(record.entries.order_by("number"))
    leaves = [bytes.fromhex(e.leaf) for e in entries]
    chains_hold = True
    for chain in MarkChain.objects.filter(record=record):
        previous = FIRST_LINK
        links = EntryMark.objects.filter(record=record, mark=chain.mark)
        for running, link in enumerate(links.order_by("running"), start=1):
            chains_hold &= link.running == running and link.previous == previous
            previous = link.link
        chains_hold &= previous == chain.link
    return {
        "head": record.head,
        "gapless": [e.number for e in entries] == list(range(1, record.head + 1)),
        "keys": [str(e.key) for e in entries],
        "tree": merkle.root_of([bytes.fromhex(p) for p in record.peaks]).hex()
        == merkle.root(leaves).hex(),
        "chains": chains_hold,
        "in_time": all(
            a.recorded_at <= b.recorded_at for a, b in itertools.pairwise(entries)
        ),
        "replay": replay(record),
    }


if __name__ == "__main__":
    start_django()
    print(json.dumps(judged(sys.argv[1])))
