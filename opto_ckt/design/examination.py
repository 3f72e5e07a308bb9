"""A table of a file read field by field: what it is, and every reason why it cannot be used, in plain words."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, NamedTuple

from opto_ckt.parts.record import FieldFacts, Finding, FindingsError, Table, facts, refusal, shown
from opto_ckt.request.reading import meant

LONGEST_LIST = 40  #: known keys told in one message


class Examined(NamedTuple):
    """What came of a table: itself, where all its fields could be read, and everything that is wrong."""

    table: Table | None
    findings: tuple[Finding, ...]


def examine(kind: type[Table], data: Mapping[str, Any]) -> Examined:
    """Read a table; checks between fields run for those that could be read."""
    known = facts(kind)
    unknown = [key for key in data if key not in known]
    misspelt = {name for name in known for key in unknown if meant(key, known) == meant(name, known)}
    findings = [Finding((key,), _unknown(key, kind)) for key in unknown]
    values: dict[str, Any] = {}
    for name, fact in known.items():
        if name not in data:
            if not fact.needed:
                values[name] = fact.default
            elif name not in misspelt:
                findings.append(Finding((name,), f"is missing{_expected(name, fact)}"))
            continue
        try:
            values[name], below = _field(fact, data[name])
        except FindingsError as error:
            below = error.findings
        findings += [Finding((name, *finding.path), finding.message) for finding in below]
    findings += kind.misstated([key for key in known if key in data])
    findings += kind.disagreements(values)
    whole = len(values) == len(known)
    table = kind.model_construct(_fields_set=set(data) & set(known), **values) if whole else None
    return Examined(table, tuple(findings))


def chosen(tables: tuple[type[Table], ...], value: Any) -> type[Table]:
    """The one kind of table, or the one whose `kind` the value names; `FindingsError` where it names none."""
    if not isinstance(value, dict):
        raise refusal(f"expected {_example(tables[0])}, got {shown(value)}")
    if len(tables) == 1:
        return tables[0]
    by_kind = {word: table for table in tables for word in facts(table)["kind"].words}
    if "kind" not in value:
        raise FindingsError([Finding(("kind",), f"is missing; allowed are {', '.join(by_kind)}")])
    try:
        return by_kind[_word(value["kind"], tuple(by_kind))]
    except FindingsError as error:
        raise FindingsError([Finding(("kind",), finding.message) for finding in error.findings]) from None


def _field(fact: FieldFacts, value: Any) -> tuple[Any, tuple[Finding, ...]]:
    """A field's value with the findings of its checks; `FindingsError` where it cannot be read."""
    if fact.tables:
        return _whole(examine(chosen(fact.tables, value), value))
    if fact.points is not None and isinstance(value, list):
        return _points(fact, fact.points, value)
    if fact.reader is not None:
        return fact.reader.read(value, fact.kinds, from_file=True), ()
    if fact.words:
        return _word(value, fact.words), ()
    if fact.points is not None:
        raise refusal(f"expected a list of {_example(fact.points, 'tables')}, got {shown(value)}")
    if not isinstance(value, bool):
        raise refusal(f"expected true or false, got {shown(value)}")
    return value, ()


def _whole(examined: Examined) -> tuple[Table, tuple[Finding, ...]]:
    if examined.table is None:
        raise FindingsError(examined.findings)
    return examined.table, examined.findings


def _points(fact: FieldFacts, kind: type[Table], entries: list[Any]) -> tuple[Any, tuple[Finding, ...]]:
    points: list[Table] = []
    findings: list[Finding] = []
    for position, entry in enumerate(entries):
        try:
            point, below = _whole(examine(chosen((kind,), entry), entry))
        except FindingsError as error:
            below = error.findings
        else:
            points.append(point)
        findings += [Finding((position, *finding.path), finding.message) for finding in below]
    if findings:
        raise FindingsError(findings)
    return (fact.order.in_order(points) if fact.order else tuple(points)), ()


def _word(value: Any, words: tuple[str, ...]) -> str:
    if not isinstance(value, str):
        raise refusal(f"{shown(value)} is not allowed; allowed are {', '.join(words)}")
    if value not in words:
        raise refusal(f"{shown(value)} is not allowed; allowed are {', '.join(words)}{meant(value, words)}")
    return value


def _unknown(key: str, kind: type[Table]) -> str:
    renamed: Mapping[str, str] = getattr(kind, "design_keys", {})
    keys = [name for name in facts(kind) if name not in renamed.values()] + list(renamed)
    allowed = f"; allowed are {', '.join(keys)}" if len(keys) <= LONGEST_LIST else ""
    return f"is not known here{allowed}{meant(key, keys)}"


def _expected(name: str, fact: FieldFacts) -> str:
    """The end of a message: what a field takes."""
    if fact.words:
        return f"; allowed are {', '.join(fact.words)}"
    if fact.example:
        return f"; expected a figure such as '{fact.example}'"
    if fact.tables:
        return f"; expected a table [{name}]"
    return f"; expected a list of {_example(fact.points, 'tables')}" if fact.points else ""


def _example(kind: type[Table], what: str = "a table") -> str:
    needed = {name: fact for name, fact in facts(kind).items() if fact.needed}
    keys = [f'{name} = "{fact.example}"' if fact.example else f"{name} = ..." for name, fact in needed.items()]
    return f"{what} such as {{ {', '.join(keys)} }}" if keys else what
