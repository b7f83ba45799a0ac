"""What the pages of a crew ask."""

from __future__ import annotations
