"""What people do, as bare verbs: a rule, a computation, then `record.append`."""
