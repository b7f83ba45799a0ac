"""Take the pictures README shows, from a prepared demo: real screens, nothing drawn.

python manage.py demo --no-serve && python -m tests.browser.pictures
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
import tempfile
import time
import urllib.request
from pathlib import Path

from tests.browser.conftest import FLAGS, NARROW, WIDE

ROOT = Path(__file__).resolve().parents[2]
FOLDER = ROOT / "fixtures" / "screens"
PORT = 8347


def main() -> None:
    folder = tempfile.mkdtemp(prefix="lathbook-pictures-")
    env = os.environ | {"LATHBOOK_DATA_DIR": folder}
    command = [sys.executable, "manage.py", "demo", "--port", str(PORT)]
    server = subprocess.Popen(command, cwd=ROOT, env=env)
    try:
        _wait(f"http://127.0.0.1:{PORT}/sign-in/")
        _take()
    finally:
        server.terminate()
        server.wait()
        shutil.rmtree(folder, ignore_errors=True)


def _wait(address: str) -> None:
    for _ in range(240):
        try:
            urllib.request.urlopen(address, timeout=2).close()
            return
        except OSError:
            time.sleep(0.5)
    raise SystemExit("The demo did not start.")


def _take() -> None:
    from playwright.sync_api import sync_playwright

    FOLDER.mkdir(parents=True, exist_ok=True)
    with sync_playwright() as playwright:
        chromium = shutil.which("chromium")
        browser = playwright.chromium.launch(executable_path=chromium, args=FLAGS)
        office = _signed_in(browser, "surveyor", WIDE)
        office.goto("/jobs/2614/plan/")
        _shoot(office, "plan")
        office.get_by_role("link", name="H4", exact=True).first.click()
        _shoot(office, "mark")
        office.get_by_role("link", name="Put H4 back").click()
        _shoot(office, "ways-back")
        office.goto("/jobs/2614/requests/")
        office.locator("h2 a").first.click()
        _shoot(office, "request")
        office.goto("/jobs/2614/record/")
        _shoot(office, "record")
        crew = _signed_in(browser, "chief", NARROW)
        crew.goto("/field/2614/")
        _shoot(crew, "field")
        browser.close()


def _signed_in(browser, role: str, size: dict[str, int]):
    from jobs.demo.telling import PASSWORD

    context = browser.new_context(
        viewport=size, base_url=f"http://127.0.0.1:{PORT}", reduced_motion="reduce"
    )
    page = context.new_page()
    page.goto("/sign-in/")
    page.get_by_label("E-mail").fill(f"{role}@example.com")
    page.get_by_label("Password").fill(PASSWORD)
    page.get_by_role("button", name="Sign in").click()
    page.wait_for_url(lambda url: "sign-in" not in url)
    return page


def _shoot(page, name: str) -> None:
    page.wait_for_load_state("networkidle")
    page.screenshot(path=FOLDER / f"{name}.png")


if __name__ == "__main__":
    from tests.arena import start_django

    os.environ.setdefault("LATHBOOK_DATA_DIR", tempfile.mkdtemp())
    start_django()
    main()
