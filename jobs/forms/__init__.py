"""What people type. A form reads and words; the rules are in the actions."""
