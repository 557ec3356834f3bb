"""The files that leave the program; each writer is a pure function from a pattern to bytes."""
