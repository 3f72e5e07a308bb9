"""Cards that every simulator reads: names, numbers, comments and a title in the portable subset.

Lower case ASCII, names of at most eight characters with a letter first, plain e-notation without suffix or unit,
full-line comments, lines under 80 characters.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from textwrap import wrap

LONGEST = 78
NAME = re.compile(r"[a-z][a-z0-9_]{0,7}")


def number(value: float) -> str:
    """A number as all simulators read it.

    >>> number(1.5e-13), number(20000.0), number(0.1)
    ('1.5e-13', '20000', '0.1')
    """
    return f"{value:.12g}"


def name(text: str) -> str:
    """A name of a node, element, model or subcircuit.

    Raises
    ------
    ValueError : the name is not portable.
    """
    lowered = text.lower()
    if lowered != "0" and not NAME.fullmatch(lowered):
        raise ValueError(f"{text!r} is not a portable name: a letter, then up to seven letters, digits or underscores")
    return lowered


def plain(text: str) -> str:
    """Text that cannot end a line or start a card: one line of printable ASCII.

    >>> plain("Valley receiver ½")
    'Valley receiver ?'
    """
    one_line = " ".join(text.split())
    return "".join(c if " " <= c <= "~" else "?" for c in one_line)


def comment(text: str) -> str:
    """Full-line comments, wrapped."""
    spelled = text
    for written, ascii_text in SPELLINGS:
        spelled = spelled.replace(written, ascii_text)
    return "".join(f"* {line}\n" for line in wrap(plain(spelled), LONGEST - 2, break_long_words=True)) or "*\n"


SPELLINGS = (
    ("√Hz", "rtHz"), ("²", "^2"), ("µ", "u"), ("Ω", "ohm"), ("°", " deg"), ("≥", ">="), ("≤", "<="), ("…", ".."),
)  # fmt: skip
"""How signs of the trade are spelled in ASCII."""


def card(head: str, *fields: str) -> str:
    """One card; its fields are ready-made names and numbers."""
    line = " ".join((head, *fields))
    if len(line) <= LONGEST:
        return line + "\n"
    lines, current = [], head
    for field in fields:
        if len(current) + 1 + len(field) > LONGEST:
            lines.append(current)
            current = "+"
        current += " " + field
    return "\n".join([*lines, current]) + "\n"


def fitting(cards: str) -> str:
    """Cards with every line that is too long continued on the next."""
    return "".join(line if len(line) <= LONGEST else card(*line.split()) for line in cards.splitlines(keepends=True))


def title(*parts: str) -> str:
    """First line of a deck: never blank, never a card."""
    text = plain(" ".join(part for part in parts if part.strip())).lower()[:LONGEST].strip()
    return (text if text and text[0].isalnum() else f"deck {text}"[:LONGEST].strip()) + "\n"


def deck(lines: Iterable[str]) -> str:
    """A whole deck."""
    return "".join(lines) + ".end\n"
