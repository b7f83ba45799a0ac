"""A reader finds every public name of geometry from its front page."""

from __future__ import annotations

import importlib
import re

import pytest

import geometry
from tests.geometry.write_index import GEOMETRY, ORDER, index, said


def test_the_index_is_what_the_packages_say_of_themselves() -> None:
    assert (GEOMETRY / "__init__.py").read_text() == index(), (
        "Write it again: python -m tests.geometry.write_index"
    )


def test_every_package_is_in_the_index() -> None:
    packages = {p.parent.name for p in GEOMETRY.glob("*/__init__.py")}
    assert packages == set(ORDER)


@pytest.mark.parametrize("package", ORDER)
def test_every_public_name_stands_there_and_can_be_imported(package: str) -> None:
    text, names = said(package)
    module = importlib.import_module(f"geometry.{package}")
    for name in names:
        assert re.search(rf"\b{re.escape(name)}\b", text), name
        assert hasattr(module, name), name
        assert name in (geometry.__doc__ or "")
