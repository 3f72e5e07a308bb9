"""Files to begin from: a design file with every field explained, a part record to fill from a data sheet."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from typing import Any, get_args

from opto_ckt.outputs.columns import padded, width
from opto_ckt.parts.record import FieldFacts, Record, Table, facts
from opto_ckt.request import Request

_TABLE = re.compile(r"\[(\w+)\]")
_KEY = re.compile(r"(?:# )?(\w+)\s*=")
_KIND = re.compile(r'kind\s*=\s*"(\w+)"')
KEEP_CLEAR = 40  #: column at which comments begin, where the entry leaves room


def design_file(starter: str, request: type[Request]) -> str:
    """A circuit's starter with a comment to each figure of a part, and what else may be given as commented lines."""
    out: list[str] = []
    for block in starter.rstrip("\n").split("\n\n"):
        lines = block.split("\n")
        heading = _TABLE.match(lines[0])
        table = _table(request, heading[1], block) if heading else None
        out += [*(_explained(lines, table) if table else lines), ""]
    return "\n".join(out)


def part_file(records: Sequence[type[Record]]) -> str:
    """A part file with one empty record of each kind; entries to be filled in between the quotes."""
    blocks = [
        "# Fill in what the data sheet gives, each value with its unit: in the quotes, or as\n"
        "# { min = ..., typ = ..., max = ... }.\n"
        "# Lines that begin with # are optional: take the # away where the sheet has the figure."
    ]
    blocks += ["\n".join(_record(record)) for record in records]
    return "\n\n".join(blocks) + "\n"


def _table(request: type[Request], name: str, block: str) -> type[Table] | None:
    """What a table of a design file holds; of several kinds of part the one whose ``kind`` the block names."""
    field = request.model_fields.get(name)
    kinds = _tables_in(field.annotation) if field else ()
    said = _KIND.search(block)
    named = [kind for kind in kinds if said and said[1] in getattr(facts(kind).get("kind"), "words", ())]
    return next(iter(named or kinds), None)


def _tables_in(annotation: Any) -> tuple[type[Table], ...]:
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return (annotation,)
    return tuple(kind for argument in get_args(annotation) for kind in _tables_in(argument))


def _explained(lines: Sequence[str], table: type[Table]) -> Iterator[str]:
    known = _as_written(table)
    present = {found[1] for line in lines if (found := _KEY.match(line))}
    present |= {names for way in _chosen_ways(table, present) for names in way}
    for line in lines:
        found = _KEY.match(line)
        words = known[found[1]].sheet if found and found[1] in known else ""
        yield line if not words or "#" in line.lstrip("# ") else _commented(line, words)
    signs = [line.index("=") for line in lines if _KEY.match(line) and "=" in line]
    for name, fact in known.items():
        if name not in present and _example(fact):
            entry = f"{padded(f'# {name}', max(signs, default=0) - 1)} = {_example(fact)}"
            yield _commented(entry, _words(fact, with_example=False))


def _as_written(table: type[Table]) -> Mapping[str, FieldFacts]:
    """Facts by the keys of a design file, where some fields go by another name."""
    known = facts(table)
    keys: Mapping[str, str] = getattr(table, "design_keys", {})
    own = {name: fact for name, fact in known.items() if name not in keys.values()}
    return own | {key: known[field] for key, field in keys.items()}


def _chosen_ways(table: type[Table], present: set[str]) -> Iterator[tuple[str, ...]]:
    """Other ways to state what the file states already."""
    for choice in table.choices:
        if any(set(group) <= present for group in choice.groups):
            yield tuple(name for group in choice.groups for name in group)


def _record(record: type[Record]) -> Iterator[str]:
    known = facts(record)
    first = {name: choice for choice in reversed(record.choices) for group in choice.groups for name in group}
    wanted = {name for choice in record.choices if choice.needed for name in choice.groups[0]}
    yield f'[{record.section}."NAME"]'
    told: set[str] = set()
    for name, fact in known.items():
        if name == "part":
            continue
        choice = first.get(name)
        if choice and choice.subject not in told:
            told.add(choice.subject)
            ways = "; or ".join(" with ".join(group) for group in choice.groups)
            yield f"# {choice.subject}{'' if choice.needed else ', if given'}: {ways}"
        entry = padded(name if fact.needed or name in wanted else f"# {name}", max(map(len, known)) + 2)
        yield _commented(f"{entry} = {_empty(fact)}", _words(fact, with_example=True))


def _empty(fact: FieldFacts) -> str:
    if fact.points is None or fact.example:
        return '""'
    entries = ", ".join(f'{name} = ""' for name in facts(fact.points))
    return f"[{{ {entries} }}]"


def _example(fact: FieldFacts) -> str:
    """What a value looks like in the file; empty where nothing is known."""
    if fact.points is not None and not fact.example:
        columns: Mapping[str, FieldFacts] = facts(fact.points)
        return "[{ " + ", ".join(f"{name} = {_example(column)}" for name, column in columns.items()) + " }]"
    text = fact.example or next(iter(fact.words), "")
    return f'"{text}"' if text else ""


def _words(fact: FieldFacts, *, with_example: bool) -> str:
    """The words of data sheets, the texts allowed, what a value looks like."""
    allowed = ("or " if fact.example else "") + " | ".join(fact.words) if fact.words else ""
    example = f"such as {_example(fact)}" if with_example and _example(fact) and not fact.words else ""
    return "; ".join(filter(None, (fact.sheet, allowed, example)))


def _commented(line: str, words: str) -> str:
    if not words:
        return line
    return f"{padded(line, KEEP_CLEAR) if width(line) < KEEP_CLEAR else line + '  '}# {words}"
