"""Reads a design file, runs its circuit and builds the result."""
