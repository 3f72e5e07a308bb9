"""What every record has: strict reading, the ways of stating a thing, checks that give reasons."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from typing import Annotated, Any, ClassVar, Literal, NamedTuple, Self, TypeVar, get_args, get_origin

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler, model_validator
from pydantic_core import CoreSchema, core_schema

from opto_ckt.parts.figure import Assumed, Finding, FindingsError, Limits, Sheet, Spread
from opto_ckt.parts.unit import FROM_FILE, Coefficient, EitherUnit, ReadBy, Unit, shown

__all__ = [
    "FROM_FILE",
    "Assumed",
    "Check",
    "Choice",
    "Coefficient",
    "EitherUnit",
    "FieldFacts",
    "Finding",
    "FindingsError",
    "Limits",
    "Points",
    "ReadBy",
    "Record",
    "Sheet",
    "Spread",
    "Table",
    "Text",
    "Unit",
    "facts",
    "plain_text",
    "shown",
]


@dataclass(frozen=True)
class PlainText:
    """Metadata of a text field: one line without control characters, so that it can be printed anywhere."""

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_plain_validator_function(plain_text)


def plain_text(value: Any) -> str:
    """A text of one line; `FindingsError` says what it holds that cannot be printed."""
    if not isinstance(value, str):
        raise FindingsError([Finding((), f"expected a text in quotes, got {shown(value)}")])
    hidden = next((letter for letter in value if not letter.isprintable()), None)
    if hidden is not None:
        raise FindingsError(
            [Finding((), f"holds the control character U+{ord(hidden):04X}; one line of printable text is expected")]
        )
    return value


Text = Annotated[str, PlainText()]
Kind = TypeVar("Kind")


@dataclass(frozen=True)
class Points:
    """Metadata of a list of points: at least so many, put in order of their first column, no value of it twice."""

    least: int = 2

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        def in_order(value: Any, validate: Callable[[Any], Any]) -> Any:
            found = validate(tuple(value) if isinstance(value, list) else value)
            return self.in_order(found) if isinstance(found, tuple) else found

        return core_schema.no_info_wrap_validator_function(in_order, handler(source))

    def in_order(self, points: Sequence[Any]) -> tuple[Any, ...]:
        """The points by their first column; `FindingsError` for too few or for a doubled one."""
        if len(points) < self.least:
            raise FindingsError([Finding((), f"{len(points)} given; {self.least} points are needed at least")])
        column = next(iter(type(points[0]).model_fields))
        ordered = sorted(points, key=lambda point: float(getattr(point, column)))
        for before, after in pairwise(ordered):
            if getattr(before, column) == getattr(after, column):
                raise FindingsError(
                    [Finding((points.index(after), column), f"two points have the same {column}; one is enough")]
                )
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


class Record(Table):
    """The figures of one part as its data sheet gives them."""

    section: ClassVar[str] = ""  #: name of the table that holds such parts in a part file

    part: Annotated[Text, Sheet("type number, order code")] = ""  #: name in the part file; empty for figures in place
    description: Annotated[Text, Sheet("title of the data sheet")] = ""
    document: Annotated[Text, Sheet("document number")] = ""
    revision: Annotated[Text, Sheet("revision, date of the data sheet")] = ""
    conditions: Annotated[Text, Sheet("test conditions")] = ""  #: under which the figures hold

    def limits(self, assumed: Mapping[str, Assumed] | None = None) -> dict[str, Limits]:
        """Limits of every figure that is given; typ-only figures are spread by `assumed`, else by the record's own."""
        chosen = assumed or {}
        return {
            name: chosen.get(name, fact.assumed).limits(value)
            for name, fact in facts(type(self)).items()
            if isinstance(value := getattr(self, name), Spread)
        }


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


@cache
def facts(table: type[Table]) -> Mapping[str, FieldFacts]:
    """What each field of a table is, in the order in which they are declared."""
    return {name: _facts(field.annotation, field.metadata, field) for name, field in table.model_fields.items()}


def _facts(annotation: Any, metadata: Sequence[Any], field: Any) -> FieldFacts:
    kinds = get_args(annotation) if get_origin(annotation) is not tuple else (annotation,)
    words = get_args(annotation) if get_origin(annotation) is Literal else ()
    words += tuple(word for kind in kinds if get_origin(kind) is Literal for word in get_args(kind))
    points = next((get_args(kind)[0] for kind in kinds if get_origin(kind) is tuple), None)
    either = _first(metadata, EitherUnit, EitherUnit((Unit(""),)))
    unit = _first(metadata, Unit, either.units[0])
    return FieldFacts(
        unit=unit.text,
        example=unit.example,
        sheet=_first(metadata, Sheet, Sheet("")).words,
        assumed=_first(metadata, Assumed, Assumed()),
        needed=field.is_required(),
        default=None if field.is_required() else field.get_default(call_default_factory=True),
        words=tuple(word for word in words if isinstance(word, str)),
        points=points if isinstance(points, type) and issubclass(points, Table) else None,
    )


def _first(metadata: Sequence[Any], kind: type[Kind], otherwise: Kind) -> Kind:
    return next((entry for entry in metadata if isinstance(entry, kind)), otherwise)
