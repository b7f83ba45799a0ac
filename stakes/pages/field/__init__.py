"""The crew's pages: one column, big targets, verbs as buttons; they work without script."""

from __future__ import annotations
