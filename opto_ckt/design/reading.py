"""A design file read with its part files: a request, or every reason why there is none."""

from __future__ import annotations

import os
from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass
from hashlib import sha256
from typing import Any

from opto_ckt.design.catalogue import Catalogue, Entry
from opto_ckt.design.examination import Examined, chosen, examine
from opto_ckt.design.files import Source, load, parse
from opto_ckt.design.merging import Merged, merge
from opto_ckt.errors import InputError, Problem
from opto_ckt.parts.record import Finding, FindingsError, Record, shown
from opto_ckt.parts.sections import records_of
from opto_ckt.request.reading import meant
from opto_ckt.request.request import Request

SCHEMA = 1

CircuitOf = Callable[[str], type[Request]]


@dataclass(frozen=True)
class ReadDesign:
    """A design as it was read."""

    request: Request
    digest: str  #: "sha256:..." over the bytes of the design file and of its part files, in the order of reading
    stem: str  #: from which the files of its results are named
    source: Source
    catalogue: Catalogue


def read_request(
    path: str, *, circuit_of: CircuitOf, circuits: Collection[str], fitted: Mapping[str, str] | None = None
) -> ReadDesign:
    """Read a design file; see `read_text`. `InputError` also where there is no such file, or it may not be read."""
    return _assemble(load(path), circuit_of, circuits, fitted or {})


def read_text(
    text: str | bytes,
    name: str,
    folder: str = "",
    *,
    circuit_of: CircuitOf,
    circuits: Collection[str],
    fitted: Mapping[str, str] | None = None,
) -> ReadDesign:
    """Read a design from its text, as it came through a stream.

    Parameters
    ----------
    text : the TOML text, or its bytes.
    name : what messages call it.
    folder : from which part files are looked up.
    circuit_of : kind of request by the name of a circuit.
    circuits : the names that it knows.
    fitted : table to name of a part that takes the place of the one in the text.

    Raises
    ------
    InputError : with every problem found, each at its file and line.
    """
    content = text.encode("utf-8", "surrogatepass") if isinstance(text, str) else text
    return _assemble(parse(content, name, folder), circuit_of, circuits, fitted or {})


def read_part_file(path: str) -> list[tuple[str, str, Record]]:
    """Section, name and record of every part of a part file and of the files that it lists; `InputError` otherwise."""
    catalogue = Catalogue()
    catalogue.add(load(path), (path,))
    problems, records = list(catalogue.problems), []
    for entry in catalogue.entries.values():
        examined = _part(entry)
        problems += [
            entry.source.problem((entry.section, entry.name, *finding.path), finding.message)
            for finding in examined.findings
        ]
        if isinstance(examined.table, Record):
            records.append((entry.section, entry.name, examined.table))
    if problems:
        raise InputError(_in_order(problems, catalogue.sources))
    return records


def _part(entry: Entry) -> Examined:
    fields = dict(entry.fields)
    try:
        kind = chosen(records_of(entry.section), fields)
    except FindingsError as error:
        return Examined(None, error.findings)
    return examine(kind, {**fields, "part": entry.name})


def _assemble(
    source: Source, circuit_of: CircuitOf, circuits: Collection[str], fitted: Mapping[str, str]
) -> ReadDesign:
    catalogue = Catalogue()
    data = dict(source.data)
    problems = _schema(source, data)
    if "parts" in data:
        catalogue.include(data["parts"], source, (source.name,))
    problems += catalogue.problems
    sources = (source, *catalogue.sources)
    name = data.get("circuit")
    if not isinstance(name, str) or name not in circuits:
        raise InputError(_in_order([*problems, _circuit_wanted(source, name, circuits)], sources))
    kind = circuit_of(name)
    tables = {
        table: merge(kind, table, fields, catalogue, fitted.get(table))
        for table, fields in data.items()
        if isinstance(fields, dict)
    }
    merged = data | {table: fields.data for table, fields in tables.items()}
    lost = {table: fields.lost for table, fields in tables.items() if fields.lost is not None}
    problems += [tables[table].problem(source, table, *finding) for table, finding in lost.items()]
    request, findings = examine(kind, {table: fields for table, fields in merged.items() if table not in lost})
    problems += [
        _located(source, tables, finding) for finding in findings if not (finding.path and finding.path[0] in lost)
    ]
    if problems or not isinstance(request, Request):
        raise InputError(_in_order(problems, sources))
    digest = sha256(b"".join(one.content for one in sources)).hexdigest()
    stem = os.path.splitext(os.path.basename(source.name))[0].strip("-") or "design"
    return ReadDesign(request, f"sha256:{digest}", stem, source, catalogue)


def _located(source: Source, tables: Mapping[str, Merged], finding: Finding) -> Problem:
    table, *below = finding.path or ("",)
    if isinstance(table, str) and table in tables:
        return tables[table].problem(source, table, tuple(below), finding.message)
    return source.problem(finding.path, finding.message)


def _schema(source: Source, data: dict[str, Any]) -> list[Problem]:
    """Take the number of the file's form out of its data."""
    schema = data.pop("schema", SCHEMA)
    if schema == SCHEMA and not isinstance(schema, bool):
        return []
    return [source.problem(("schema",), f"{shown(schema)} is not known; this version reads schema = {SCHEMA}")]


def _circuit_wanted(source: Source, name: Any, circuits: Collection[str]) -> Problem:
    allowed = f"allowed are {', '.join(circuits)}"
    if name is None:
        return source.problem(("circuit",), f"is missing; {allowed}")
    hint = meant(name, circuits) if isinstance(name, str) else ""
    return source.problem(("circuit",), f"{shown(name)} is no circuit; {allowed}{hint}")


def _in_order(problems: Iterable[Problem], sources: Sequence[Source]) -> list[Problem]:
    """By file in the order of reading, then by line; each only once."""
    files = [source.name for source in sources]

    def place(problem: Problem) -> tuple[int, int]:
        position = files.index(problem.file) if problem.file in files else len(files)
        return position, problem.line or 0

    return sorted(dict.fromkeys(problems), key=place)
