"""What people do: bare verbs, one subject a file. Rules live here and nowhere else."""
