"""Lists of what there is: circuits, figures, parts."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping, Sequence
from itertools import groupby
from typing import Any

from opto_ckt.figures import FIGURES
from opto_ckt.outputs.columns import aligned, packed
from opto_ckt.parts.record import FieldFacts, Record, Spread, Table, facts
from opto_ckt.units import known, write

PAGE = 100
MAIN = 6  #: figures of a part that are shown without asking for more
ABOUT = frozenset({"part", "description", "document", "revision", "conditions"})
"""Fields of a record that are no figures."""


def circuits_list(titles: Mapping[str, str]) -> str:
    """Name and title of each circuit."""
    return "\n".join(aligned(list(titles.items()), "ll", indent=0)) + "\n"


def figures_table(offers: Mapping[str, Collection[str]]) -> str:
    """Every figure that a circuit offers: name, unit, what exactly is meant, which circuits have it."""
    rows = [("Figure", "unit", "circuits", "what is meant")]
    for figure in FIGURES.values():
        having = [circuit for circuit, names in offers.items() if figure.name in names]
        if having:
            who = "all" if len(having) == len(offers) > 1 else ", ".join(having)
            rows.append((figure.name, figure.unit, who, figure.convention))
    return "\n".join(aligned(rows, "llll", indent=0)) + "\n"


def parts_list(file: str, parts: Sequence[tuple[str, str, Record]], *, verbose: bool = False) -> str:
    """The parts of one file by section: name, what it is, its main figures; every figure where verbose."""
    lines = [file]
    for section, group in groupby(sorted(parts, key=lambda entry: entry[0]), key=lambda entry: entry[0]):
        lines += ["", section]
        for _, name, record in group:
            lines.append(f"  {name}" + (f"  {record.description}" if record.description else ""))
            lines += _verbose(record) if verbose else packed(_main(record), 6, PAGE)
    if not parts:
        lines.append("  no parts")
    return "\n".join(lines) + "\n"


def _main(record: Record) -> list[str]:
    chosen = [*_figures(record, needed=True)] or [*_figures(record, needed=False)]
    return [f"{name.replace('_', ' ')} {text}" for name, text in chosen[:MAIN]]


def _verbose(record: Record) -> Iterator[str]:
    said = ((name, str(getattr(record, name))) for name in ("document", "revision", "conditions"))
    about = [(name, text) for name, text in said if text]
    yield from aligned([*about, *_figures(record, needed=False)], "ll", indent=6)


def _figures(record: Record, *, needed: bool) -> Iterator[tuple[str, str]]:
    """Figures that the record gives; those that every part of its kind must have."""
    for name, fact in facts(type(record)).items():
        value = getattr(record, name)
        given = name in record.model_fields_set and value is not None and name not in ABOUT
        if given and (fact.needed or not needed):
            yield name, _text(value, fact)


def _text(value: Any, fact: FieldFacts) -> str:
    if isinstance(value, tuple):
        return "; ".join(_point(point) for point in value)
    if isinstance(value, Spread):
        return _spread(value, fact.unit)
    if isinstance(value, str):
        return value
    return _number(getattr(value, "value", value), getattr(value, "unit", fact.unit))


def _point(point: Table) -> str:
    kind: type[Table] = type(point)
    columns = [(name, fact, getattr(point, name)) for name, fact in facts(kind).items()]
    return " at ".join(_text(value, fact) for _, fact, value in reversed(columns) if value is not None)


def _spread(spread: Spread, unit: str) -> str:
    """Typical value with its limits: ``9 pF (to 11 pF)``; the limits alone where the sheet gives no typical one."""
    if spread.typ is None:
        sides = [(word, side) for word, side in (("at least", spread.min), ("at most", spread.max)) if side is not None]
        return ", ".join(f"{word} {_number(side, unit)}" for word, side in sides)
    sides = [(word, side) for word, side in (("from", spread.min), ("to", spread.max)) if side is not None]
    limits = " ".join(f"{word} {_number(side, unit)}" for word, side in sides)
    return _number(spread.typ, unit) + (f" ({limits})" if limits else "")


def _number(value: Any, unit: str) -> str:
    return write(value, unit, trim=True) if known(unit) and isinstance(value, int | float) else str(value)
