"""Timings, each beside a baseline in the same run; scripts, never collected as tests."""

from __future__ import annotations
