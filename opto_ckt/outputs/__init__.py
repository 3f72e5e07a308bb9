"""Decks, bill of materials, schematic and printed page, each from a result."""
