"""Pictures of what the record knows, as SVG: one drawing for page, paper and download.

Pure Python. Nothing here reads the database or knows about requests."""

from __future__ import annotations
