"""Text in columns, aligned by what a character takes on a screen."""

from __future__ import annotations

import unicodedata
from collections.abc import Sequence

GAP = "  "  #: between columns
LEAST = 20  #: columns that a wrapped text is given at least, however far it is indented


def width(text: str) -> int:
    """Screen columns of one line: two for wide characters, none for those that join the one before.

    >>> width("kΩ"), width("光"), width("e\u0301")
    (2, 2, 1)
    """
    if text.isascii():
        return len(text)
    return sum(
        0 if unicodedata.combining(letter) else 2 if unicodedata.east_asian_width(letter) in "WF" else 1 for letter in text
    )


def padded(text: str, columns: int, side: str = "l") -> str:
    """The text filled up with blanks; ``side`` says where the text stands, l or r."""
    blanks = " " * max(0, columns - width(text))
    return blanks + text if side == "r" else text + blanks


def aligned(rows: Sequence[Sequence[str]], sides: str, indent: int = 2) -> list[str]:
    """Rows as lines, each column as wide as its widest cell; the last one is left as it is.

    >>> aligned([("R1", "24 kΩ", "feedback"), ("C12", "1 pF", "")], "lrl")
    ['  R1   24 kΩ  feedback', '  C12   1 pF']
    """
    widths = [max(map(width, column)) for column in zip(*rows, strict=True)]
    return [
        (" " * indent + GAP.join(padded(*cell) for cell in zip(row, widths, sides, strict=True) if cell[1])).rstrip()
        for row in rows
    ]


def wrapped(text: str, indent: int, columns: int | None) -> list[str]:
    """One paragraph in lines of at most so many columns, broken at blanks only; a single line where there is no limit."""
    if columns is None:
        return [" " * indent + text]
    room = max(LEAST, columns - indent)
    lines = [""]
    for word in text.split(" "):
        longer = f"{lines[-1]} {word}" if lines[-1] else word
        if lines[-1] and width(longer) > room:
            lines.append(word)
        else:
            lines[-1] = longer
    return [" " * indent + line for line in lines]


def hanging(line: str, indent: int, columns: int | None) -> list[str]:
    """A line that was put together in columns; what passes the limit goes on below its last column, at ``indent``."""
    if columns is None or width(line) <= columns:
        return [line]
    at = _place(line, indent)
    first, *others = wrapped(line[at:], indent, columns)
    return [line[:at] + first[indent:], *others]


def _place(line: str, columns: int) -> int:
    """Number of characters that take so many columns."""
    taken = 0
    for place, letter in enumerate(line):
        if taken >= columns:
            return place
        taken += width(letter)
    return len(line)
