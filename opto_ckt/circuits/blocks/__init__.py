"""Blocks: parts of a circuit that any circuit may take."""
