"""The part files of a design: every part by its section and name, and where it stands."""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any, NamedTuple

from opto_ckt.design.files import Source, load
from opto_ckt.errors import InputError, Problem
from opto_ckt.parts.record import Finding, FindingsError, plain_text, shown
from opto_ckt.parts.sections import SECTIONS
from opto_ckt.request.reading import meant


class Entry(NamedTuple):
    """One part as its file writes it."""

    section: str
    name: str
    fields: Mapping[str, Any]
    source: Source


@dataclass
class Catalogue:
    """What the part files hold; problems are collected, not raised."""

    entries: dict[tuple[str, str], Entry] = field(default_factory=dict)
    sources: list[Source] = field(default_factory=list)
    problems: list[Problem] = field(default_factory=list)

    def names(self, section: str) -> tuple[str, ...]:
        """Parts of one section in the order of the files."""
        return tuple(name for kind, name in self.entries if kind == section)

    def include(self, paths: Any, source: Source, chain: tuple[str, ...]) -> None:
        """Bring in the files that `source` lists under `parts`; `chain` are the files that led here."""
        if not isinstance(paths, list):
            self.problems.append(
                source.problem(("parts",), f'expected a list of part files, such as ["parts.toml"], got {shown(paths)}')
            )
            return
        for position, path in enumerate(paths):
            try:
                self._include_one(plain_text(path), source, chain)
            except FindingsError as error:
                self.problems += [source.problem(("parts", position), finding.message) for finding in error.findings]
            except InputError as error:
                whole = [problem for problem in error.problems if problem.line is None]
                told = [source.problem(("parts", position), f"{problem.file} {problem.message}") for problem in whole]
                self.problems += told + [problem for problem in error.problems if problem.line is not None]

    def _include_one(self, path: str, source: Source, chain: tuple[str, ...]) -> None:
        name = os.path.normpath(os.path.join(source.folder, path))
        if _same(name) in map(_same, chain):
            round_trip = " -> ".join((*chain, name))
            raise FindingsError([Finding((), f"part files include each other in a circle: {round_trip}")])
        if _same(name) not in (_same(known.name) for known in self.sources):
            self.add(load(name), (*chain, name))

    def add(self, source: Source, chain: tuple[str, ...]) -> None:
        """Take in the parts of one file and the files that it lists."""
        self.sources.append(source)
        for entry in self._entries(source):
            known = self.entries.setdefault((entry.section, entry.name), entry)
            if known is not entry:
                path = (entry.section, entry.name)
                line = known.source.places.line_of(path)
                self.problems.append(
                    source.problem(
                        path, f"is there twice, at {known.source.name}:{line} too; a name stands for one part"
                    )
                )
        if "parts" in source.data:
            self.include(source.data["parts"], source, chain)

    def _entries(self, source: Source) -> Iterator[Entry]:
        for section, parts in source.data.items():
            if section in ("parts", "schema"):
                continue
            if section not in SECTIONS:
                self.problems.append(
                    source.problem(
                        (section,),
                        f"is no section of a part file; allowed are {', '.join(SECTIONS)}{meant(section, SECTIONS)}",
                    )
                )
                continue
            example = f'[{section}."NAME"]'
            if not isinstance(parts, dict):
                self.problems.append(source.problem((section,), f"expected tables {example}, got {shown(parts)}"))
                continue
            for name, fields in parts.items():
                if not isinstance(fields, dict):
                    self.problems.append(source.problem((section, name), f"belongs into a table {example} of one part"))
                    continue
                if "part" in fields:
                    self.problems.append(
                        source.problem(
                            (section, name, "part"), "is for design files; here the table is named after the part"
                        )
                    )
                try:
                    plain_text(name)
                except FindingsError as error:
                    self.problems += [
                        source.problem((section, name), f"the name {finding.message}") for finding in error.findings
                    ]
                if not name.strip():
                    self.problems.append(source.problem((section, name), "the name of a part is empty"))
                yield Entry(section, name, {key: value for key, value in fields.items() if key != "part"}, source)


def _same(path: str) -> str:
    return os.path.realpath(path)
