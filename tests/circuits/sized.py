"""Sized designs for tests: a design's text, changed here and there, run through the whole job."""

from __future__ import annotations

import re
from functools import cache

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.design.model import Model
from opto_ckt.design.reading import ReadDesign, read_text
from opto_ckt.design.sizing import size
from opto_ckt.result import Result


def read(name: str, *changes: tuple[str, str]) -> ReadDesign:
    """The circuit's own starter with lines replaced: (pattern of a whole line, new line), or ("", lines to append)."""
    text = load(name).starter
    for pattern, line in changes:
        if not pattern:
            text += f"\n{line}\n"
            continue
        text, count = re.subn(rf"(?m)^{pattern}.*$", lambda _, line=line: line, text)
        assert count == 1, f"{pattern!r} stands in {count} lines of the starter"
    return read_text(text, "design.toml", circuit_of=lambda name: load(name).request, circuits=CIRCUITS)


@cache
def sized(name: str, *changes: tuple[str, str]) -> Result:
    """The result of `read`."""
    return size(read(name, *changes), load(name))


def model(name: str, *changes: tuple[str, str]) -> Model:
    """The model of `read`."""
    return Model(load(name), read(name, *changes).request)
