"""The unit of a field: how the text of a file becomes a figure in SI."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Literal, get_args, get_origin

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, core_schema

from opto_ckt.parts.figure import Finding, FindingsError, Spread
from opto_ckt.units import UnitError, read

SIDES = ("min", "typ", "max")
FROM_FILE: Mapping[str, bool] = {"from_file": True}
"""Context of a validation that reads a file: there a number without a unit is refused; in Python it is SI."""

Sign = Literal["positive", "not negative", "not positive", "any"]
ALLOWS: Mapping[Sign, tuple[Callable[[float], bool], str]] = {
    "positive": (lambda value: value > 0, "above zero"),
    "not negative": (lambda value: value >= 0, "zero or above"),
    "not positive": (lambda value: value <= 0, "zero or below"),
    "any": (lambda value: True, ""),
}


@dataclass(frozen=True)
class Unit:
    """Metadata of a field: the unit in which its text is read, an example, the sign that it may have.

    The field is a `Spread`, a `float`, either of them or None, or a figure that may also be a tuple of points.
    """

    text: str
    example: str = ""
    sign: Sign = "positive"

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        kinds = get_args(source) or (source,)
        reader = self.read_spread if Spread in kinds else self.read_number
        words = tuple(word for kind in kinds if get_origin(kind) is Literal for word in get_args(kind))
        points = next((kind for kind in kinds if get_origin(kind) is tuple), None)

        def plain(value: Any, info: core_schema.ValidationInfo) -> Any:
            if (value is None and type(None) in kinds) or (isinstance(value, str) and value in words):
                return value
            try:
                return reader(value, from_file=bool(info.context and info.context.get("from_file")))
            except FindingsError as error:
                if not words:
                    raise
                hint = f"; {', '.join(words)} would do too"
                raise FindingsError([Finding(path, message + hint) for path, message in error.findings]) from None

        if points is None:
            return core_schema.with_info_plain_validator_function(plain)

        def either(value: Any, validate: Callable[[Any], Any], info: core_schema.ValidationInfo) -> Any:
            return validate(tuple(value)) if isinstance(value, list | tuple) else plain(value, info)

        return core_schema.with_info_wrap_validator_function(either, handler.generate_schema(points))

    def read_number(self, value: Any, *, from_file: bool) -> float:
        """One SI number from text with its unit, or, outside files, from a number."""
        number = self._read(value, from_file=from_file)
        allows, wanted = ALLOWS[self.sign]
        if not allows(number):
            raise FindingsError(
                [Finding((), f"{shown(value)} is not {wanted}; a figure {wanted} is expected{self._such_as}")]
            )
        return number

    def read_spread(self, value: Any, *, from_file: bool) -> Spread:
        """A spread from one text, or from a table of min, typ and max."""
        if isinstance(value, Spread):
            for side in (value.min, value.typ, value.max):
                if side is not None:
                    self.read_number(side, from_file=False)
            return value
        if not isinstance(value, Mapping):
            return Spread(typ=self.read_number(value, from_file=from_file))
        findings, sides = [], {}
        for key, entry in value.items():
            if key not in SIDES:
                findings.append(Finding((str(key),), "is not known here; min, typ and max are"))
                continue
            try:
                sides[key] = self.read_number(entry, from_file=from_file)
            except FindingsError as error:
                findings += [Finding((key, *finding.path), finding.message) for finding in error.findings]
        falling = [
            (first, second)
            for position, first in enumerate(SIDES)
            for second in SIDES[position + 1 :]
            if first in sides and second in sides and sides[first] > sides[second]
        ]
        findings += [
            Finding(
                (first,),
                f"{first} {shown(value[first])} is above {second} {shown(value[second])}; min ≤ typ ≤ max is needed",
            )
            for first, second in falling[:1]
        ]
        if not value:
            findings.append(Finding((), f"the table is empty; one of min, typ, max is needed{self._such_as}"))
        if findings:
            raise FindingsError(findings)
        return Spread(**sides)

    @property
    def _such_as(self) -> str:
        return f", such as '{self.example}'" if self.example else ""

    def _read(self, value: Any, *, from_file: bool) -> float:
        if isinstance(value, bool) or not isinstance(value, str | int | float):
            raise FindingsError([Finding((), f"expected a figure{self._such_as}, got {shown(value)}")])
        if not from_file and not isinstance(value, str):
            return float(value)
        try:
            return read(value, self.text)
        except UnitError as error:
            raise FindingsError([Finding((), str(error))]) from None


NAMES: Mapping[type, str] = {bool: "true or false", dict: "a table", list: "a list"}


@dataclass(frozen=True)
class ReadBy:
    """Metadata of a field that one function reads: `reader(value, from_file=...)`, `FindingsError` where it cannot."""

    reader: Callable[..., Any]

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        reader = self.reader

        def plain(value: Any, info: core_schema.ValidationInfo) -> Any:
            return reader(value, from_file=bool(info.context and info.context.get("from_file")))

        return core_schema.with_info_plain_validator_function(plain)


@dataclass(frozen=True)
class Coefficient:
    """A figure that sheets state in one of several units; `value` is in the SI unit of `unit`."""

    value: float
    unit: str


@dataclass(frozen=True)
class EitherUnit:
    """Metadata of a `Coefficient`: the units in which its text may stand."""

    units: tuple[Unit, ...]

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_plain_validator_function(self.read)

    def read(self, value: Any) -> Coefficient | None:
        """The figure with the unit in which it was stated."""
        if value is None or isinstance(value, Coefficient):
            return value
        for unit in self.units:
            try:
                read(value, unit.text)
            except (UnitError, TypeError):
                continue
            return Coefficient(unit.read_number(value, from_file=True), unit.text)
        expected = " or ".join(f"in {unit.text} such as '{unit.example}'" for unit in self.units)
        raise FindingsError([Finding((), f"expected a figure {expected}, got {shown(value)}")])


def shown(value: Any) -> str:
    """A value as the reader of a message knows it from the file."""
    if isinstance(value, str):
        return f"'{value[:60]}'"
    return NAMES.get(type(value), str(value)[:60])
