"""Text in columns, aligned by what a character takes on a screen."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Sequence

GAP = "  "  #: between columns
LEAST = 20  #: columns that a wrapped text is given at least, however far it is indented
_TEARABLE = re.compile(r"(?<![0-9≥≤=±…]) (?!…)")  #: blanks that do not join a number to its unit or its sign


def width(text: str) -> int:
    """Screen columns of one line: two for wide characters, none for those that join the one before.

    >>> width("kΩ"), width("光"), width("e\u0301")
    (2, 2, 1)
    """
    if text.isascii():
        return len(text)
    return sum(
        0 if unicodedata.combining(letter) else 2 if unicodedata.east_asian_width(letter) in "WF" else 1
        for letter in text
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
    """One sentence in lines of at most so many columns, no number torn from its unit; one line where there is no limit.

    >>> wrapped("2 V over 97 µA", 2, 22)
    ['  2 V over 97 µA']
    """
    if columns is None:
        return [" " * indent + text]
    return _filled(_TEARABLE.split(text), " ", indent, columns)


def packed(items: Sequence[str], indent: int, columns: int, before: str = "") -> list[str]:
    """A list with commas in lines of at most so many columns, no item torn; ``before`` stands ahead of the first line.

    >>> packed(["R1 high", "C1 low", "hottest"], 4, 24, before="at  ")
    ['at  R1 high, C1 low,', '    hottest']
    """
    if not items:
        return [before.rstrip()] if before else []
    first, *others = _filled([f"{item}," for item in items[:-1]] + [items[-1]], " ", indent, columns)
    return [before + first[indent:] if before else first, *others]


def _filled(pieces: Sequence[str], between: str, indent: int, columns: int) -> list[str]:
    room = max(LEAST, columns - indent)
    lines = [pieces[0]]
    for piece in pieces[1:]:
        longer = f"{lines[-1]}{between}{piece}"
        if width(longer) > room:
            lines.append(piece)
        else:
            lines[-1] = longer
    return [" " * indent + line for line in lines]
