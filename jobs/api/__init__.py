"""The JSON API: the same questions and actions as the pages, thin, under one door."""
