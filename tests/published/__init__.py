"""Figures as printed, each with where it stands.

Textbook examples were read as executed examples of the FOSSEE textbook companions (revision d34b2ae), not in the books;
data sheets and articles were read themselves unless the test says from memory.
"""
