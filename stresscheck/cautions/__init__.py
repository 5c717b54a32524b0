"""What can hurt a person: one hazard a file, thresholds as data. A caution triggers, and never clears."""
