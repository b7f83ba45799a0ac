"""The demo: a firm, two jobs, ten visits, told by running the real actions.

Nothing here writes to the record but through the verbs people use. Everything is keyed
in one go, so each fact shows that it was recorded later than it happened.
"""
