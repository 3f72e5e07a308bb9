"""Part records filled in with the examples that stand beside their fields."""

from __future__ import annotations

import re
import tomllib
from typing import Any, TypeVar

from opto_ckt.outputs.starter import part_file
from opto_ckt.parts.record import FROM_FILE, Record, facts

Kind = TypeVar("Kind", bound=Record)
ENTRY = re.compile(r'^(\w+ *= )(""|\[\{.*?\}\]) *# (.*)$')


def filled_text(record: type[Record]) -> str:
    """The empty record of a kind with each entry that is needed filled in as its comment says."""
    return "\n".join(_filled(line) for line in part_file([record]).splitlines())


def filled(record: type[Kind]) -> Kind:
    """A record of examples."""
    fields: dict[str, Any] = tomllib.loads(filled_text(record))[record.section]["NAME"]
    return record.model_validate(fields, context=dict(FROM_FILE))


def _filled(line: str) -> str:
    found = ENTRY.match(line)
    if not found:
        return line
    example = re.search(r"such as (.*)$", found[3])
    if example:
        return found[1] + example[1]
    words = found[3].split("; ")[-1].split(" | ")
    return f'{found[1]}"{words[0]}"'


def needed(record: type[Record]) -> list[str]:
    """Names of the fields that every part of a kind must have."""
    return [name for name, fact in facts(record).items() if fact.needed]
