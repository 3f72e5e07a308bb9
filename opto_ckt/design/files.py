"""A file of the engineer brought in as text and TOML, or refused with the reason."""

from __future__ import annotations

import os
import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from opto_ckt.design.places import Places, find_places
from opto_ckt.errors import InputError, Problem

LARGEST = 1_000_000  #: bytes; the largest of real part files stays far below
BYTE_ORDER_MARK = b"\xef\xbb\xbf"
BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")


@dataclass(frozen=True)
class Source:
    """One file that was read."""

    name: str  #: as it is told to the engineer
    content: bytes
    text: str
    data: Mapping[str, Any]
    folder: str  #: from which the files that it names are looked up

    @cached_property
    def places(self) -> Places:
        """Lines of its keys; worked out when a message needs one."""
        return find_places(self.text)

    def problem(self, path: tuple[str | int, ...], message: str) -> Problem:
        """Something wrong at a key of this file."""
        return Problem(self.name, self.places.line_of(path), key_of(path), message)


def key_of(path: tuple[str | int, ...]) -> str:
    """A path as it is written in the file.

    >>> key_of(("opamp", "HB-OA 4", "power", 2))
    'opamp."HB-OA 4".power[2]'
    """
    written = ""
    for part in path:
        if isinstance(part, int):
            written += f"[{part}]"
        else:
            plain = BARE_KEY.fullmatch(part)
            shown = part if plain else '"' + "".join(letter if letter.isprintable() else "?" for letter in part) + '"'
            written += f".{shown}" if written else shown
    return written


def load(path: str) -> Source:
    """Read one file; `InputError` says why it cannot be used."""
    try:
        with open(path, "rb") as file:
            content = file.read(LARGEST + 1)
    except IsADirectoryError:
        raise refused(path, "is a directory; a file is expected") from None
    except FileNotFoundError:
        raise refused(path, "there is no such file") from None
    except PermissionError:
        raise refused(path, "may not be read; no permission") from None
    except (OSError, ValueError) as error:
        raise refused(path, f"cannot be read: {getattr(error, 'strerror', None) or error}") from None
    return parse(content, path, os.path.dirname(path))


def parse(content: bytes, name: str, folder: str) -> Source:
    """Bytes as TOML; `InputError` names the line where they are not."""
    if len(content) > LARGEST:
        raise refused(name, f"is larger than {LARGEST // 1000} kB; a design or part file is not")
    if content.startswith(BYTE_ORDER_MARK):
        raise refused(name, "begins with a byte-order mark; save it as UTF-8 without one", 1)
    try:
        text = content.decode("utf-8")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        raise refused(name, "is not UTF-8 text; save it as UTF-8", line) from None
    if not text.strip():
        raise refused(name, "is empty")
    try:
        data = tomllib.loads(text)
    except RecursionError:
        raise refused(name, "is nested too deep") from None
    except ValueError as error:
        raise _no_toml(name, str(error)) from None
    return Source(name, content, text, data, folder)


def _no_toml(name: str, said: str) -> InputError:
    place = re.search(r"\s*\(at (?:line (\d+), column \d+|end of document)\)$", said)
    reason = said[: place.start()] if place else said
    reason = "".join(letter if letter.isprintable() else "?" for letter in reason)
    line = int(place[1]) if place and place[1] else None
    ended = " before the file ends" if place and not place[1] else ""
    return refused(name, f"is not valid TOML: {reason[:1].lower()}{reason[1:]}{ended}", line)


def refused(name: str, reason: str, line: int | None = None) -> InputError:
    """The end of a file that cannot be used at all."""
    return InputError([Problem(name, line, "", reason)])
