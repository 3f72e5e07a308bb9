"""Tables of a design or part file: frozen, strict, checked for what is stated twice and what does not go together."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterator, Mapping, Sequence
from functools import cache
from itertools import pairwise
from typing import Any, ClassVar, NamedTuple, Self, TypeVar

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler, model_validator
from pydantic_core import CoreSchema, core_schema

from opto_ckt.parts.figure import Assumed, Finding, FindingsError, Sheet
from opto_ckt.parts.reader import Alternatives, Reader, alternatives, points_in, words_in
from opto_ckt.parts.unit import EitherUnit, Unit

Kind = TypeVar("Kind")


class Points:
    """Metadata of a list of points: at least so many, put in order of their first column, no value of it twice."""

    def __init__(self, least: int) -> None:
        self.least = least

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        def in_order(value: Any, validate: Callable[[Any], Any]) -> Any:
            found = validate(tuple(value) if isinstance(value, list) else value)
            return self.in_order(found) if isinstance(found, tuple) else found

        return core_schema.no_info_wrap_validator_function(in_order, handler(source))

    def in_order(self, points: Sequence[Any]) -> tuple[Any, ...]:
        """The points by their first column; `FindingsError` for too few or for a doubled one."""
        if len(points) < self.least:
            wanted = "one point is" if self.least == 1 else f"{self.least} points are"
            raise FindingsError([Finding((), f"{len(points)} given; {wanted} needed at least")])
        column = next(iter(type(points[0]).model_fields))
        ordered = sorted(points, key=lambda point: float(getattr(point, column)))
        for before, after in pairwise(ordered):
            if getattr(before, column) == getattr(after, column):
                twice = Finding((points.index(after), column), f"two points have the same {column}; one is enough")
                raise FindingsError([twice])
        return tuple(ordered)


class Choice(NamedTuple):
    """Ways to state one thing: exactly one group of keys (where not needed, at most one) may be there, and whole."""

    subject: str
    groups: tuple[tuple[str, ...], ...]
    needed: bool = True

    def findings(self, keys: Collection[str]) -> Iterator[Finding]:
        """What is wrong with the keys that are present."""
        begun = [group for group in self.groups if any(key in keys for key in group)]
        whole = [group for group in self.groups if all(key in keys for key in group)]
        found = [key for group in self.groups for key in group if key in keys]
        ways = "; or ".join(" with ".join(group) for group in self.groups)
        if not found:
            if self.needed:
                yield Finding((), f"{self.subject} is missing; give {ways}")
        elif len(begun) > 1:
            yield Finding(
                (found[-1],), f"{self.subject} is stated in more than one way ({', '.join(found)}); give {ways}"
            )
        elif not whole:
            missing = ", ".join(key for key in begun[0] if key not in keys)
            yield Finding((found[0],), f"{self.subject} needs {missing} beside {', '.join(found)}; allowed is {ways}")


class Check(NamedTuple):
    """A condition between several fields; runs where all of them could be read."""

    fields: tuple[str, ...]
    find: Callable[..., Iterator[Finding]]


class Table(BaseModel):
    """A table of a design or part file; frozen, strict, no unknown key."""

    model_config = ConfigDict(frozen=True, strict=True, extra="forbid", allow_inf_nan=False, defer_build=True)

    choices: ClassVar[tuple[Choice, ...]] = ()
    checks: ClassVar[tuple[Check, ...]] = ()

    @model_validator(mode="after")
    def _agree(self) -> Self:
        given = [name for name in self.model_fields_set if getattr(self, name) is not None]
        values = {name: getattr(self, name) for name in type(self).model_fields}
        found = [*self.misstated(given), *self.disagreements(values)]
        if found:
            raise FindingsError(found)
        return self

    @classmethod
    def misstated(cls, keys: Collection[str]) -> Iterator[Finding]:
        """What is stated not at all, by half or twice."""
        for choice in cls.choices:
            yield from choice.findings(keys)

    @classmethod
    def disagreements(cls, values: Mapping[str, Any]) -> Iterator[Finding]:
        """What does not go together among the fields whose values are there."""
        for check in cls.checks:
            if all(name in values for name in check.fields):
                yield from check.find(*(values[name] for name in check.fields))


class FieldFacts(NamedTuple):
    """What is known of one field of a table besides its value."""

    unit: str  #: empty for texts, words and counts
    example: str
    sheet: str  #: the words that data sheets use
    assumed: Assumed
    needed: bool
    default: Any
    words: tuple[str, ...]  #: the only texts allowed; empty where any is
    points: type[Table] | None  #: what one entry of a list is
    kinds: Alternatives
    tables: tuple[type[Table], ...]  #: tables of which the field may be one
    reader: Reader | None
    order: Points | None


@cache
def facts(table: type[Table]) -> Mapping[str, FieldFacts]:
    """What each field of a table is, in the order in which they are declared."""
    return {name: _facts(field.annotation, field.metadata, field) for name, field in table.model_fields.items()}


def _facts(annotation: Any, metadata: Sequence[Any], field: Any) -> FieldFacts:
    kinds = alternatives(annotation)
    reader = _first(metadata, Reader)
    units = (reader,) if isinstance(reader, Unit) else reader.units if isinstance(reader, EitherUnit) else (Unit(""),)
    points = points_in(kinds)
    sheet, assumed = _first(metadata, Sheet), _first(metadata, Assumed)
    return FieldFacts(
        unit=units[0].text,
        example=units[0].example,
        sheet=sheet.words if sheet else "",
        assumed=assumed or Assumed(),
        needed=field.is_required(),
        default=None if field.is_required() else field.get_default(call_default_factory=True),
        words=words_in(kinds),
        points=points if _is_table(points) else None,
        kinds=kinds,
        tables=tuple(kind for kind in kinds if _is_table(kind)),
        reader=reader,
        order=_first(metadata, Points),
    )


def _is_table(kind: Any) -> bool:
    return isinstance(kind, type) and issubclass(kind, Table)


def _first(metadata: Sequence[Any], kind: type[Kind]) -> Kind | None:
    return next((entry for entry in metadata if isinstance(entry, kind)), None)
