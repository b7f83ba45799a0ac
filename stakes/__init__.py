"""What is in the ground and how it is known: the record, the plan, marks and checks.

    page / API / phone -> door -> action -> record.append -+- Entry       (only grows)
                                                   same    +- fold        (pure)
                                                transaction+- read model  (rebuilt at will)
    page / API / dossier <- query <- read model, or the same fold up to (T, K)

Nothing here refers upward to `jobs`; `Record` is the root below.
"""
