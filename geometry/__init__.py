"""What a surveyor computes about stakes: pure computation, arrays in, answers out."""

from __future__ import annotations
