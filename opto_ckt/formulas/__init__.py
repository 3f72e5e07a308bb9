"""Closed forms, one subject a file."""
