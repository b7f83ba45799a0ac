"""Thin pages: ask the door's answer, read a form, call an action, show or redirect."""
