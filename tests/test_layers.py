"""Arrows run one way: jobs -> stakes -> geometry, with jobs.config on top."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
FORBIDDEN = {
    "geometry": {"stakes", "jobs", "django", "rest_framework", "celery", "psycopg"},
    "stakes": {"jobs"},
    "jobs": set(),
}
PURE = ("stakes/standing", "stakes/drawings", "stakes/record/merkle.py")
"""Parts of stakes that are read and tested without Django."""
AGREED = {
    "README.md",
    "DEVELOPERS.md",
    "manage.py",
    "pyproject.toml",
    "jobs",
    "stakes",
    "geometry",
    "tests",
    "fixtures",
}


def imported(file: Path) -> set[str]:
    """The modules a file imports, wherever in the file, as dotted names."""
    found: set[str] = set()
    for node in ast.walk(ast.parse(file.read_text())):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
            found.add(node.module)
            found |= {f"{node.module}.{alias.name}" for alias in node.names}
    return found


def roots(file: Path) -> set[str]:
    return {name.split(".")[0] for name in imported(file)}


@pytest.mark.parametrize("package", FORBIDDEN)
def test_no_import_runs_against_the_arrows(package: str) -> None:
    wrong = {
        str(file.relative_to(ROOT)): roots(file) & FORBIDDEN[package]
        for file in (ROOT / package).rglob("*.py")
        if roots(file) & FORBIDDEN[package]
    }
    assert wrong == {}


def test_only_config_and_the_outside_know_config() -> None:
    """Settings are read through django.conf; the rest of jobs does not import config."""
    wrong = [
        str(file.relative_to(ROOT))
        for file in (ROOT / "jobs").rglob("*.py")
        if "config" not in file.parts
        and any(name.startswith("jobs.config") for name in imported(file))
    ]
    # Waking the broker is the one call into Celery's own module, made when needed.
    assert wrong == ["jobs/work/asking.py"]


@pytest.mark.parametrize("part", PURE)
def test_the_pure_parts_of_stakes_need_no_django(part: str) -> None:
    path = ROOT / part
    files = [path] if path.suffix else list(path.rglob("*.py"))
    assert files
    assert [str(f) for f in files if "django" in roots(f)] == []


def test_the_top_level_holds_only_what_was_agreed() -> None:
    names = {p.name for p in ROOT.iterdir() if not p.name.startswith(".")}
    assert names - AGREED <= {"__pycache__", "build", "lathbook.egg-info"}
