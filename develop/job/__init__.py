"""Jobs: the job file, and the way from a piece to its files."""
