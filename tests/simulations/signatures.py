"""Error rates of the signatures against simulated setups, with fixed seeds.

Run with `python -m tests.simulations.signatures [runs]`; prints confusion tables,
false alarms and the cure of ambiguous answers. Never collected as a test.
"""

from __future__ import annotations

import sys

import numpy as np

from tests.simulations.signature_gross import report_gross
from tests.simulations.signature_others import (
    report_heights,
    report_one_stake,
    report_revisions,
)
from tests.simulations.signature_small import (
    report_cure,
    report_false_alarms,
    report_small,
    report_wild,
)

REPORTS = (
    report_small,
    report_false_alarms,
    report_wild,
    report_cure,
    report_gross,
    report_heights,
    report_revisions,
    report_one_stake,
)


def main() -> None:
    runs = int(sys.argv[1]) if len(sys.argv) > 1 else 200
    for number, report in enumerate(REPORTS):
        report(runs, np.random.default_rng(1000 + number))


if __name__ == "__main__":
    main()
