"""What is on the ground and what may be trusted: pure folds, no database, no clock."""
