"""Who, when and on whose word: people, seats, jobs, visits, requests, handovers.

Arrows run one way: `jobs` -> `stakes` -> `geometry`. Only `jobs.config` knows the
whole program.
"""
