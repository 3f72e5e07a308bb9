"""Every reason why a table cannot be used, in plain words; runs where the reading of the whole has failed."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import partial
from typing import Annotated, Any, NamedTuple, get_args, get_origin

from pydantic import TypeAdapter, ValidationError
from pydantic_core import ErrorDetails

from opto_ckt.parts.record import FROM_FILE, FieldFacts, Finding, FindingsError, Table, facts, shown
from opto_ckt.request.reading import meant

LONGEST_LIST = 40  #: known keys told in one message


class Examined(NamedTuple):
    """What came of a table: itself, as far as all its fields could be read, and everything that is wrong."""

    table: Table | None
    findings: tuple[Finding, ...]


def examine(kind: type[Table], data: Mapping[str, Any]) -> Examined:
    """Read a table field by field; checks between fields run for those that could be read."""
    known = facts(kind)
    values: dict[str, Any] = {}
    unknown = [key for key in data if key not in known]
    findings = [Finding((key,), _unknown(key, kind)) for key in unknown]
    misspelt = {name for name in known if any(meant(key, known) == meant(name, known) for key in unknown)}
    whole = True
    for name, fact in known.items():
        if name not in data:
            if fact.needed:
                whole = False
                missing = f"is missing{_expected(kind, name, fact)}"
                findings += [] if name in misspelt else [Finding((name,), missing)]
            else:
                values[name] = fact.default
            continue
        try:
            value, below = _field(kind, name, data[name])
        except FindingsError as error:
            value, below = None, error.findings
            whole = False
        else:
            values[name] = value
        findings += [Finding((name, *finding.path), finding.message) for finding in below]
    findings += kind.misstated([key for key in known if key in data])
    findings += kind.disagreements(values)
    table = kind.model_construct(_fields_set=set(data) & set(known), **values) if whole else None
    return Examined(table, tuple(findings))


def _field(kind: type[Table], name: str, value: Any) -> tuple[Any, tuple[Finding, ...]]:
    """A field's value with the findings of its checks; `FindingsError` where it cannot be read."""
    field = kind.model_fields[name]
    tables = [part for part in _parts(field.annotation) if _is_table(part)]
    points = facts(kind)[name].points
    if tables:
        return _read(partial(_chosen, tables), value)
    if points is not None and isinstance(value, list):
        read = [_entry(points, position, entry) for position, entry in enumerate(value)]
        broken = [finding for _, findings in read for finding in findings]
        if broken:
            raise FindingsError(broken)
    form: Any = Annotated[(field.annotation, field, *field.metadata)]
    adapter: TypeAdapter[Any] = TypeAdapter(form)
    try:
        return adapter.validate_python(value, strict=True, context=dict(FROM_FILE)), ()
    except ValidationError as error:
        raise FindingsError(
            [finding for detail in error.errors(include_url=False) for finding in _told(detail, facts(kind)[name])]
        ) from None


def _read(choose: Callable[[Any], type[Table]], value: Any) -> tuple[Any, tuple[Finding, ...]]:
    examined = examine(choose(value), value)
    if examined.table is None:
        raise FindingsError(examined.findings)
    return examined.table, examined.findings


def _entry(points: type[Table], position: int, entry: Any) -> tuple[Any, tuple[Finding, ...]]:
    if not isinstance(entry, dict):
        return None, (Finding((position,), f"expected {_example(points)}, got {shown(entry)}"),)
    examined = examine(points, entry)
    return examined.table, tuple(Finding((position, *finding.path), finding.message) for finding in examined.findings)


def _chosen(tables: list[type[Table]], value: Any) -> type[Table]:
    """The one kind of table, or the one whose `kind` the value names."""
    if not isinstance(value, dict):
        raise FindingsError([Finding((), f"expected {_example(tables[0])}, got {shown(value)}")])
    if len(tables) == 1:
        return tables[0]
    by_kind = {word: table for table in tables for word in facts(table)["kind"].words}
    kind = value.get("kind")
    if kind is None:
        raise FindingsError([Finding(("kind",), f"is missing; allowed are {', '.join(by_kind)}")])
    if not isinstance(kind, str) or kind not in by_kind:
        hint = meant(kind, by_kind) if isinstance(kind, str) else ""
        raise FindingsError(
            [Finding(("kind",), f"{shown(kind)} is not allowed; allowed are {', '.join(by_kind)}{hint}")]
        )
    return by_kind[kind]


def _parts(annotation: Any) -> tuple[Any, ...]:
    """The alternatives of a field."""
    origin = get_origin(annotation)
    if origin is None or origin is tuple:
        return (annotation,)
    return tuple(part for argument in get_args(annotation) for part in _parts(argument))


def _is_table(part: Any) -> bool:
    return isinstance(part, type) and issubclass(part, Table)


def _unknown(key: str, kind: type[Table]) -> str:
    keys = [name for name in facts(kind) if name not in _hidden(kind)] + list(_design_keys(kind))
    allowed = f"; allowed are {', '.join(keys)}" if len(keys) <= LONGEST_LIST else ""
    return f"is not known here{allowed}{meant(key, keys)}"


def _design_keys(kind: type[Table]) -> Mapping[str, str]:
    keys: Mapping[str, str] = getattr(kind, "design_keys", {})
    return keys


def _hidden(kind: type[Table]) -> frozenset[str]:
    return frozenset(_design_keys(kind).values())


def _expected(kind: type[Table], name: str, fact: FieldFacts) -> str:
    """The end of a message: what a field takes."""
    if fact.words:
        return f"; allowed are {', '.join(fact.words)}"
    if fact.example:
        return f"; expected a figure such as '{fact.example}'"
    tables = [part for part in _parts(kind.model_fields[name].annotation) if _is_table(part)]
    if tables:
        return f"; expected a table [{name}]"
    return f"; expected a list of {_example(fact.points)}" if fact.points else ""


def _example(kind: type[Table]) -> str:
    named = ", ".join(
        f'{name} = "{fact.example}"' if fact.example else f"{name} = ..."
        for name, fact in facts(kind).items()
        if fact.needed
    )
    return f"a table such as {{ {named} }}" if named else "a table"


Teller = Callable[[ErrorDetails, FieldFacts], str]

TELLERS: Mapping[str, Teller] = {
    "literal_error": lambda error, fact: (
        f"{shown(error['input'])} is not allowed; allowed are {', '.join(fact.words)}"
        + (meant(error["input"], fact.words) if isinstance(error["input"], str) else "")
    ),
    "bool_type": lambda error, fact: f"expected true or false, got {shown(error['input'])}",
    "int_type": lambda error, fact: f"expected a whole number without quotes, got {shown(error['input'])}",
    "greater_than_equal": lambda error, fact: (
        f"{shown(error['input'])} is too small; {error['ctx']['ge']} or more is expected"
    ),
    "less_than_equal": lambda error, fact: (
        f"{shown(error['input'])} is too large; {error['ctx']['le']} or less is expected"
    ),
    "tuple_type": lambda error, fact: (
        f"expected a list of {_example(fact.points) if fact.points else 'entries'}, got {shown(error['input'])}"
    ),
}  #: how the reader's own refusals are told; figures and texts tell theirs themselves


def _told(detail: ErrorDetails, fact: FieldFacts) -> tuple[Finding, ...]:
    own = detail.get("ctx", {}).get("error")
    path = tuple(detail["loc"])
    if isinstance(own, FindingsError):
        return tuple(Finding((*path, *finding.path), finding.message) for finding in own.findings)
    if own is not None:
        return (Finding(path, str(own)),)
    tell = TELLERS.get(detail["type"])
    return (Finding(path, tell(detail, fact) if tell else f"{shown(detail['input'])} does not fit here"),)
