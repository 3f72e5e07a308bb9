"""Data-sheet records, one kind of part a file."""
