"""Pages that read a job: plan, marks, one mark, the record, one entry."""
