"""How the value of a field is read: metadata of the field, used alike by records built in Python and by files."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, core_schema

from opto_ckt.parts.figure import Finding, FindingsError

Alternatives = tuple[Any, ...]
"""What a field may hold, each alternative of its annotation by itself."""

FROM_FILE: Mapping[str, bool] = {"from_file": True}
"""Context of a validation that reads a file: there a number without a unit is refused; in Python it is SI."""


def alternatives(annotation: Any) -> Alternatives:
    """The alternatives of an annotation: those of a union, or the one that it is."""
    if get_origin(annotation) not in (Union, UnionType):
        return (annotation,)
    return tuple(part for argument in get_args(annotation) for part in alternatives(argument))


def points_in(kinds: Alternatives) -> Any:
    """What one entry of a list is, where the field may be one; else None."""
    origins: list[Any] = [get_origin(kind) for kind in kinds]
    return next((get_args(kind)[0] for kind, origin in zip(kinds, origins, strict=True) if origin is tuple), None)


def words_in(kinds: Alternatives) -> tuple[str, ...]:
    """The words that the field may be."""
    origins: list[Any] = [get_origin(kind) for kind in kinds]
    return tuple(
        word for kind, origin in zip(kinds, origins, strict=True) if origin is Literal for word in get_args(kind)
    )


class Reader:
    """Metadata that reads a value; a subclass says how."""

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> Any:
        """The value of a field that holds one of `kinds`; `FindingsError` where there is none."""
        raise NotImplementedError

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        kinds = alternatives(source)
        points = points_in(kinds)

        def plain(value: Any, info: core_schema.ValidationInfo) -> Any:
            if value is None and type(None) in kinds:
                return None
            return self.read(value, kinds, from_file=bool(info.context and info.context.get("from_file")))

        if points is None or not self.leaves_points:
            return core_schema.with_info_plain_validator_function(plain)

        def either(value: Any, validate: Callable[[Any], Any], info: core_schema.ValidationInfo) -> Any:
            return validate(tuple(value)) if isinstance(value, list | tuple) else plain(value, info)

        several: Any = tuple
        return core_schema.with_info_wrap_validator_function(either, handler.generate_schema(several[points, ...]))

    leaves_points = False  #: whether a list of points is none of its business


class ReadBy(Reader):
    """Metadata of a field that one function reads: `function(value, from_file=...)`."""

    def __init__(self, function: Callable[..., Any]) -> None:
        self.function = function

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> Any:
        """What the function makes of the value."""
        return self.function(value, from_file=from_file)


class PlainText(Reader):
    """Metadata of a text field: one line without control characters, so that it can be printed anywhere."""

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> str:
        """The text itself."""
        return plain_text(value)


class Whole(Reader):
    """Metadata of a count within bounds."""

    def __init__(self, least: int, most: int | None = None) -> None:
        self.least, self.most = least, most

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> int:
        """The count itself."""
        if isinstance(value, bool) or not isinstance(value, int):
            raise refusal(f"expected a whole number without quotes, got {shown(value)}")
        if value < self.least:
            raise refusal(f"{shown(value)} is too small; {self.least} or more is expected")
        if self.most is not None and value > self.most:
            raise refusal(f"{shown(value)} is too large; {self.most} or less is expected")
        return value


def plain_text(value: Any) -> str:
    """A text of one line; `FindingsError` says what it holds that cannot be printed."""
    if not isinstance(value, str):
        raise refusal(f"expected a text in quotes, got {shown(value)}")
    hidden = next((letter for letter in value if not letter.isprintable()), None)
    if hidden is not None:
        raise refusal(f"holds the control character U+{ord(hidden):04X}; one line of printable text is expected")
    return value


Text = Annotated[str, PlainText()]


def refusal(message: str) -> FindingsError:
    """The end of a value that cannot be read, for one reason."""
    return FindingsError([Finding((), message)])


NAMES: Mapping[type, str] = {bool: "true or false", dict: "a table", list: "a list", tuple: "a list"}
LONGEST_SHOWN = 60
GREATEST_SHOWN = 10**20


def shown(value: Any) -> str:
    """A value as the reader of a message knows it from the file."""
    if isinstance(value, str):
        return f"'{''.join(letter if letter.isprintable() else '?' for letter in value[:LONGEST_SHOWN])}'"
    if type(value) is int and abs(value) > GREATEST_SHOWN:
        return "a huge number"
    return NAMES.get(type(value)) or str(value)[:LONGEST_SHOWN]
