"""Points in and out: rows as people and files write them, comma text, GeoJSON.

Reading is pure and bounded; nothing here writes to the record.
"""
