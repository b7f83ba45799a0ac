"""Pages with many marks beside the same page with none, and the plan of 5,000 marks.

    python -m tests.benchmarks.pages

With a Chromium on the machine the frame time of a pan is measured too.
"""

from __future__ import annotations

import argparse
import gzip
import os
import shutil
import statistics
import sys
import tempfile
import time
import uuid
from collections.abc import Callable
from pathlib import Path

from tests.arena import arena, start_django


def milliseconds(work: Callable[[], object], rounds: int = 7) -> float:
    taken = []
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        taken.append((time.perf_counter() - start) * 1000)
    return statistics.median(taken)


def filled(number: str, marks: int):
    """A job with so many marks on a grid of streets, half of them set and checked."""
    from geometry.units import Unit
    from jobs.actions.open_job import open_job
    from stakes.kinds.checking import Judgement, StakeChecked
    from stakes.kinds.setting import StakeSet
    from stakes.record import append
    from tests.builders import CHIEF, after, plan, row

    job = open_job(
        number=number, name=f"Site {number}", unit=Unit.FOOT, zone="UTC", by=CHIEF
    )
    record = job.record
    keys = []
    for start in range(0, marks, 1000):
        rows = [
            row(str(n), str(1000 + n // 100 * 25), str(5000 + n % 100 * 10))
            for n in range(start, min(start + 1000, marks))
        ]
        keys += plan(record, *rows)
    half = keys[: len(keys) // 2]
    for start in range(0, len(half), 500):
        part = half[start : start + 500]
        append(record, [StakeSet(mark=m) for m in part], by=CHIEF, at=after(1))
        passed = Judgement(verdict="pass")
        checked = StakeChecked(
            check=uuid.uuid4(),
            sort="position",
            listed=tuple(part),
            components="pe",
            grade=2,
            judgement=passed,
        )
        append(record, checked, by=CHIEF, at=after(2))
    return record


def measure() -> None:
    start_django()
    from django.conf import settings
    from django.db import connection
    from django.test import Client
    from django.test.utils import CaptureQueriesContext

    from stakes.drawings.plan import draw
    from stakes.queries.drawing import plan_of
    from stakes.queries.state import job_state

    settings.ALLOWED_HOSTS.append("testserver")
    manager = _manager()
    empty, full, large = filled("empty", 0), filled("full", 2000), filled("large", 5000)
    client = Client()
    client.force_login(manager)
    print("| page | 2,000 marks, ms | no marks, ms | ratio | queries with / without |")
    print("|---|---|---|---|---|")
    for page in ("", "plan/", "marks/"):
        counts = []
        for record in (full, empty):
            with CaptureQueriesContext(connection) as asked:
                answer = client.get(f"/jobs/{record.number}/{page}")
            assert answer.status_code == 200
            counts.append(len(asked))
        ms = milliseconds(lambda page=page: client.get(f"/jobs/full/{page}"))
        base = milliseconds(lambda page=page: client.get(f"/jobs/empty/{page}"))
        name = f"/jobs/N/{page}"
        print(
            f"| {name} | {ms:.0f} | {base:.0f} | {ms / base:.1f} "
            f"| {counts[0]} / {counts[1]} |"
        )
    state = job_state(large)
    plan = plan_of(state, "plan")
    ms = milliseconds(lambda: draw(plan), 5)
    drawing = draw(plan)
    packed = len(gzip.compress(drawing.encode()))
    print(f"\nSite plan of 5,000 marks: drawn in {ms:.0f} ms, {len(drawing):,} bytes, ")
    print(f"{packed:,} compressed, {drawing.count('<text')} texts.")
    _frames(drawing)


def _manager():
    from jobs.actions.people import add_company, add_person
    from jobs.models import CompanyKind, FirmRole

    firm = add_company(name="Firm", kind=CompanyKind.FIRM)
    return add_person(
        email="m@example.com", name="Manager", company=firm, firm_role=FirmRole.MANAGER
    )


def _frames(drawing: str) -> None:
    chromium = shutil.which("chromium")
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        chromium = None
    if chromium is None:
        print("Frame time not measured: no browser here.")
        return
    script = Path(__file__).parents[2] / "stakes/static/stakes/js/plan.js"
    page_text = (
        "<!doctype html><style>svg{width:1200px;height:840px}</style>"
        f"<figure data-plan>{drawing}</figure><script type=module>"
        f"{script.read_text()}</script>"
    )
    with (
        tempfile.NamedTemporaryFile("w", suffix=".html") as file,
        sync_playwright() as p,
    ):
        file.write(page_text)
        file.flush()
        from tests.browser.conftest import FLAGS

        browser = p.chromium.launch(executable_path=chromium, args=FLAGS)
        page = browser.new_page(viewport={"width": 1280, "height": 900})
        page.goto(f"file://{file.name}")
        frames = page.evaluate(_PAN)
        browser.close()
    frames.sort()
    middle, late = frames[len(frames) // 2], frames[-2]
    print(
        f"Frame of a pan: median {middle:.0f} ms, second worst {late:.0f} ms (software)."
    )


_PAN = """async () => {
  const svg = document.querySelector("svg.site-plan");
  const box = svg.getBoundingClientRect();
  const at = (type, x) => svg.dispatchEvent(new PointerEvent(type, {
    pointerId: 1, clientX: box.x + x, clientY: box.y + 300, bubbles: true }));
  svg.setPointerCapture = () => {};
  at("pointerdown", 200);
  const taken = [];
  for (let step = 0; step < 40; step++) {
    const start = performance.now();
    at("pointermove", 210 + step * 8);
    await new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)));
    taken.push(performance.now() - start);
  }
  at("pointerup", 530);
  return taken;
}"""


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--inside", action="store_true", help=argparse.SUPPRESS)
    if parser.parse_args().inside:
        measure()
        return
    with arena(os.environ.get("DATABASE_URL", "")) as ring:
        sys.stdout.write(f"{ring.engine}\n\n")
        sys.stdout.write(ring.run("tests.benchmarks.pages", "--inside"))


if __name__ == "__main__":
    main()
