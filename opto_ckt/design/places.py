"""Where the keys of a TOML text stand, so that a message can name the line."""

from __future__ import annotations

import tomllib
from bisect import bisect_right
from dataclasses import dataclass, field

Path = tuple[str | int, ...]

BLANK = " \t"
QUOTES = ("'", '"')
ENDS_SCALAR = ",]}#\n"


@dataclass(frozen=True)
class Places:
    """Line of every key and list entry of one text."""

    lines: dict[Path, int] = field(default_factory=dict)

    def line_of(self, path: Path) -> int | None:
        """Line of a key, or of its nearest ancestor that stands in the text; None for the whole text."""
        for length in range(len(path), 0, -1):
            if path[:length] in self.lines:
                return self.lines[path[:length]]
        return None


def find_places(text: str) -> Places:
    """Lines of the keys of a text that `tomllib` reads; nothing is promised for any other.

    >>> places = find_places('a = 1\\n[b]\\nc.d = [\\n  2,\\n  3]\\n')
    >>> places.line_of(("b", "c", "d", 1)), places.line_of(("b", "missing")), places.line_of(("missing",))
    (5, 2, None)
    """
    scanner = _Scanner(text.replace("\r\n", "\n"))
    scanner.document()
    return Places(scanner.lines)


class _Scanner:
    """One walk over the text: headers, keys and values; values are only passed over."""

    def __init__(self, text: str) -> None:
        self.text = text + "\n"
        self.at = 0
        self.breaks = [position for position, letter in enumerate(text) if letter == "\n"]
        self.lines: dict[Path, int] = {}
        self.counts: dict[Path, int] = {}  # entries so far of each array of tables

    def document(self) -> None:
        table: Path = ()
        self.blank(newlines=True)
        while self.at < len(self.text):
            if self.text[self.at] == "[":
                table = self.header()
            else:
                self.pair(table)
            self.blank(newlines=True)

    def header(self) -> Path:
        doubled = self.text.startswith("[[", self.at)
        line = self.line()
        self.at += 2 if doubled else 1
        *parents, last = self.keys()
        self.at += 2 if doubled else 1
        path: Path = ()
        for key in parents:
            path = self.entered((*path, key), line)
        path = (*path, last)
        if not doubled:
            return self.entered(path, line)
        self.counts[path] = self.counts.get(path, 0) + 1
        return self.entered(path, line)

    def entered(self, path: Path, line: int) -> Path:
        """The path noted, and gone into the newest entry where it is an array of tables."""
        self.lines.setdefault(path, line)
        if path in self.counts:
            path = (*path, self.counts[path] - 1)
            self.lines.setdefault(path, line)
        return path

    def pair(self, table: Path) -> None:
        line = self.line()
        path = table
        for key in self.keys():
            path = (*path, key)
            self.lines.setdefault(path, line)
        self.at += 1  # the sign =
        self.blank(newlines=False)
        self.value(path)

    def keys(self) -> list[str]:
        found = []
        while True:
            self.blank(newlines=False)
            found.append(self.key())
            self.blank(newlines=False)
            if self.text[self.at] != ".":
                return found
            self.at += 1

    def key(self) -> str:
        start = self.at
        if self.text[self.at] in QUOTES:
            self.string()
            return str(tomllib.loads(f"key = {self.text[start : self.at]}")["key"])
        while self.text[self.at].isalnum() or self.text[self.at] in "-_":
            self.at += 1
        if self.at == start:
            raise ValueError(f"no key at line {self.line()}")
        return self.text[start : self.at]

    def value(self, path: Path) -> None:
        letter = self.text[self.at]
        if letter in QUOTES:
            self.string()
        elif letter == "[":
            self.array(path)
        elif letter == "{":
            self.inline(path)
        else:
            while self.text[self.at] not in ENDS_SCALAR:
                self.at += 1

    def string(self) -> None:
        quote = self.text[self.at]
        escapes = quote == '"'
        if self.text.startswith(quote * 3, self.at):
            self.at += 3
            while not self.text.startswith(quote * 3, self.at):
                self.at += 2 if escapes and self.text[self.at] == "\\" else 1
            self.at += 3
            while self.text[self.at] == quote:  # up to two quotes may end the text itself
                self.at += 1
            return
        self.at += 1
        while self.text[self.at] != quote:
            self.at += 2 if escapes and self.text[self.at] == "\\" else 1
        self.at += 1

    def array(self, path: Path) -> None:
        self.at += 1
        entry = 0
        self.blank(newlines=True)
        while self.text[self.at] != "]":
            self.lines[(*path, entry)] = self.line()
            self.value((*path, entry))
            entry += 1
            self.blank(newlines=True)
            if self.text[self.at] == ",":
                self.at += 1
                self.blank(newlines=True)
        self.at += 1

    def inline(self, path: Path) -> None:
        self.at += 1
        self.blank(newlines=True)
        while self.text[self.at] != "}":
            self.pair(path)
            self.blank(newlines=True)
            if self.text[self.at] == ",":
                self.at += 1
                self.blank(newlines=True)
        self.at += 1

    def blank(self, *, newlines: bool) -> None:
        """Pass over spaces; over line ends and comments too where they may stand."""
        passed = BLANK + "\n" if newlines else BLANK
        while self.at < len(self.text):
            if self.text[self.at] in passed:
                self.at += 1
            elif newlines and self.text[self.at] == "#":
                self.at = self.text.index("\n", self.at)
            else:
                return

    def line(self) -> int:
        return bisect_right(self.breaks, self.at) + 1
