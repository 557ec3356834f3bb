"""Published tables, each with its source, and their readers."""
