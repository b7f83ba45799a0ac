"""Nominal against simulated error rates; scripts with fixed seeds, never collected."""

from __future__ import annotations
