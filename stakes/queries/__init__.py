"""Questions asked of the record and its read models; nothing here writes."""
