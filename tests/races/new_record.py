"""Make an empty record.  python -m tests.races.new_record NUMBER"""

from __future__ import annotations

import sys

from tests.arena import start_django

if __name__ == "__main__":
    start_django()
    from tests.builders import make_record

    make_record(sys.argv[1])
