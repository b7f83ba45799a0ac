"""README.md and DEVELOPERS.md speak of what is there: settings, commands, paths, kinds."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from jobs.config.env import KNOWN
from stakes.record import KINDS

ROOT = Path(__file__).resolve().parent.parent
README = (ROOT / "README.md").read_text()
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text()


def commands() -> set[str]:
    found = ROOT.glob("*/management/commands/*.py")
    return {path.stem for path in found if path.stem != "__init__"}


def test_every_setting_stands_in_the_readme_and_no_other() -> None:
    told = set(re.findall(r"`(LATHBOOK_[A-Z_]+|DATABASE_URL)` \|", README))
    assert told == set(KNOWN)


def test_every_command_stands_in_the_readme_and_no_other() -> None:
    assert (
        set(re.findall(r"^\| `manage\.py (\w+)`", README, re.MULTILINE)) == commands()
    )


def test_the_two_commands_make_their_own_environment() -> None:
    blocks = re.findall(r"```\n(python3 -m venv .+?)\n```", README)
    assert len(blocks) == 2
    assert all("\n" not in block for block in blocks)
    assert blocks[0].endswith("manage.py demo")
    assert "pytest" in blocks[1]


@pytest.mark.parametrize("text", [README, DEVELOPERS], ids=["README", "DEVELOPERS"])
def test_every_path_it_names_exists(text: str) -> None:
    named = set(
        re.findall(r"`((?:geometry|stakes|jobs|tests|fixtures)/[\w./-]+)`", text)
    )
    named |= set(re.findall(r"\]\((fixtures/[\w./-]+)\)", text))
    missing = [path for path in named if not (ROOT / path).exists()]
    assert missing == []


@pytest.mark.parametrize("text", [README, DEVELOPERS], ids=["README", "DEVELOPERS"])
def test_every_module_it_says_to_run_is_there(text: str) -> None:
    for module in re.findall(r"python -m (tests[\w.]+)", text):
        assert (ROOT / (module.replace(".", "/") + ".py")).exists(), module


def test_the_kind_walked_through_is_a_kind() -> None:
    [words] = re.findall(r'@kind\("([^"]+)"\)', DEVELOPERS)
    assert words in KINDS


def test_every_kind_documents_itself() -> None:
    silent = [
        words for words, fact in KINDS.items() if not (fact.__doc__ or "").strip()
    ]
    assert silent == []
