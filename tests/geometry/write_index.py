"""Writes the index in `geometry/__init__.py` from what each package says of itself.

python -m tests.geometry.write_index
"""

from __future__ import annotations

import ast
from pathlib import Path

GEOMETRY = Path(__file__).resolve().parents[2] / "geometry"
ORDER = (
    "units",
    "frames",
    "cogo",
    "corrections",
    "curves",
    "alignment",
    "section",
    "layout",
    "precision",
    "ways",
    "survive",
    "adjust",
    "moved",
    "decide",
    "match",
    "signature",
)
HEAD = (
    '"""What a surveyor computes about stakes: pure computation, arrays in, answers out.'
    """

Points are (E, N) in metres, azimuths radians clockwise from north, offsets right
positive, covariances m². Every error is a `GeometryError` that says what is wrong,
where, and what to do. Each package lists its public names by the question they answer;
import a name from its package: `from geometry.cogo import inverse`.
"""
)


def said(package: str) -> tuple[str, list[str]]:
    """A package's docstring and its public names."""
    tree = ast.parse((GEOMETRY / package / "__init__.py").read_text())
    names = next(
        ast.literal_eval(node.value)
        for node in tree.body
        if isinstance(node, ast.Assign)
        and isinstance(node.targets[0], ast.Name)
        and node.targets[0].id == "__all__"
    )
    return ast.get_docstring(tree) or "", names


def index() -> str:
    """The whole text of `geometry/__init__.py`."""
    parts = [HEAD]
    for package in ORDER:
        title = f"geometry.{package}"
        parts.append(f"{title}\n{'=' * len(title)}\n{said(package)[0].strip()}\n")
    return "\n".join(parts) + '"""\n\nfrom __future__ import annotations\n'


if __name__ == "__main__":
    (GEOMETRY / "__init__.py").write_text(index())
