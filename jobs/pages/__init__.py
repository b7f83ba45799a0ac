"""Pages: door, form, verb, answer. No rule lives here."""
