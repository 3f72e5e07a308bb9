"""What an engineer asks for, as far as circuits of every kind share it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, get_args

from pydantic import Field

from opto_ckt.parts.record import Assumed, Finding, FindingsError, Limits, ReadBy, Record, Spread, Table, Text, shown
from opto_ckt.request.reading import Limit, meant, read_assumed, read_fixed, read_limits
from opto_ckt.request.tables import Preferred


def _read_paths(value: Any, *, from_file: bool) -> tuple[str, ...]:
    if not isinstance(value, list | tuple) or not all(isinstance(path, str) for path in value):
        raise FindingsError([Finding((), f'expected a list of part files, such as ["parts.toml"], got {shown(value)}')])
    return tuple(value)


class Request(Table):
    """One design file: the tables that every circuit reads. A circuit's own request adds its parts and its signal."""

    title: Text = ""
    revision: Text = ""
    circuit: Text
    parts: Annotated[tuple[str, ...], ReadBy(_read_paths)] = ()
    require: Annotated[Mapping[str, Limit], ReadBy(read_limits)] = Field(default_factory=dict)
    preferred: Preferred = Field(default_factory=Preferred.model_construct)
    assumed: Annotated[Mapping[str, Assumed], ReadBy(read_assumed)] = Field(default_factory=dict)
    fixed: Annotated[Mapping[str, float], ReadBy(read_fixed)] = Field(default_factory=dict)

    @property
    def blocks_asked(self) -> tuple[str, ...]:
        """Names of the blocks that are to be fitted."""
        return ()

    def limits(self, table: str) -> dict[str, Limits]:
        """Limits of each figure of the part in one table, typ-only figures spread as `[assumed]` or the record says."""
        record = getattr(self, table)
        return {} if record is None else record.limits(self.assumed)

    @classmethod
    def disagreements(cls, values: Mapping[str, Any]) -> Any:
        """What does not go together among the tables that could be read; names under `[assumed]` that no part has."""
        yield from super().disagreements(values)
        spreads = {
            name
            for kind in cls.model_fields.values()
            for record in records_in(kind.annotation)
            for name in spread_fields(record)
        }
        for name in values.get("assumed", ()):
            if name not in spreads:
                yield Finding(("assumed", name), f"is no figure of a part of this circuit{meant(name, spreads)}")


def records_in(annotation: Any) -> tuple[type[Record], ...]:
    """The kinds of part that a field of a request may hold."""
    if isinstance(annotation, type) and issubclass(annotation, Record):
        return (annotation,)
    return tuple(record for argument in get_args(annotation) for record in records_in(argument))


def spread_fields(record: type[Record]) -> tuple[str, ...]:
    """Names of the figures of a record that may have limits."""
    return tuple(
        name
        for name, field in record.model_fields.items()
        if field.annotation is Spread or Spread in get_args(field.annotation)
    )
