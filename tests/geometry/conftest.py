"""Property tests are not timed: a busy machine must not make them fail.

`--hypothesis-profile=search` looks much longer for inputs that break a promise.
"""

from __future__ import annotations

from hypothesis import settings

settings.register_profile("unhurried", deadline=None)
settings.register_profile("search", deadline=None, max_examples=3000)
settings.load_profile("unhurried")
