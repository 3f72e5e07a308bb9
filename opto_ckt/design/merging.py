"""A table of a design together with the part that it names, and from which file each field came."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from opto_ckt.design.catalogue import Catalogue, Entry
from opto_ckt.design.files import Source
from opto_ckt.errors import Problem
from opto_ckt.parts.record import Finding, Record, shown
from opto_ckt.request.reading import meant
from opto_ckt.request.request import Request, records_in

NAMES_TOLD = 30  #: parts named in one message


@dataclass(frozen=True)
class Merged:
    """The fields of one table, those beside `part` over those of the part."""

    data: dict[str, Any]
    own: frozenset[str]  #: fields that stand in the design file
    entry: Entry | None
    keys: Mapping[str, str]  #: field to key, where a design file has another name for it
    lost: Finding | None = None  #: why the part could not be found

    def problem(self, source: Source, table: str, path: tuple[str | int, ...], message: str) -> Problem:
        """Something wrong at a field of this table, told where the field stands."""
        field = path[0] if path else None
        in_design = self.entry is None or field in self.own or field in self.keys
        if self.entry is not None and not in_design:
            return self.entry.source.problem((self.entry.section, self.entry.name, *path), message)
        if field is None:
            return source.problem((table,), message)
        return source.problem((table, self.keys.get(str(field), field), *path[1:]), message)


def merge(
    kind: type[Request], table: str, fields: Mapping[str, Any], catalogue: Catalogue, fitted: str | None
) -> Merged:
    """The fields of a table over those of its part; `fitted` takes the place of the part that the table names."""
    records = records_in(kind.model_fields[table].annotation) if table in kind.model_fields else ()
    if not records:
        return Merged(dict(fields), frozenset(fields), None, {})
    renamed = {key: name for record in records for key, name in getattr(record, "design_keys", {}).items()}
    keys = {name: key for key, name in renamed.items()}
    own = {renamed.get(key, key): value for key, value in fields.items()}
    section = records[0].section
    name = fitted or own.get("part")
    if name is None:
        return Merged(own, frozenset(own), None, keys)
    entry = catalogue.entries.get((section, name)) if isinstance(name, str) else None
    if entry is None:
        return Merged(own, frozenset(own), None, keys, Finding(("part",), _not_there(name, section, catalogue)))
    base = {key: value for key, value in entry.fields.items() if key not in _displaced(records, own)}
    return Merged({**base, **own, "part": name}, frozenset(own), entry, keys)


def _displaced(records: tuple[type[Record], ...], own: Mapping[str, Any]) -> set[str]:
    """Fields of the part that state otherwise what the design file states beside it."""
    displaced: set[str] = set()
    for choice in (choice for record in records for choice in record.choices):
        begun = [group for group in choice.groups if any(key in own for key in group)]
        if begun:
            displaced.update(key for group in choice.groups for key in group if key not in begun[0])
    return displaced


def _not_there(name: Any, section: str, catalogue: Catalogue) -> str:
    if not isinstance(name, str):
        return f"expected the name of a part in quotes, got {shown(name)}"
    names = catalogue.names(section)
    if not names:
        return f"{shown(name)} is not to be found: the part files hold no part under {section}"
    told = ", ".join(names[:NAMES_TOLD]) + (", ..." if len(names) > NAMES_TOLD else "")
    return f"{shown(name)} is in no part file; under {section} there are {told}{meant(name, names)}"
