"""Questions: they only read."""
