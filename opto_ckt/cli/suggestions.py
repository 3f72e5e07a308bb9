"""The word that was probably meant."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches


def meant(word: str, words: Iterable[str]) -> str:
    """A hint at the nearest word; empty where none is near.

    >>> meant("siez", ["size", "bom"])
    "; did you mean 'size'?"
    """
    near = get_close_matches(word.lower(), list(words), n=1, cutoff=0.5)
    return f"; did you mean '{near[0]}'?" if near else ""
