"""The unit of a field: how the text of a file becomes a figure in SI."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any, Literal, NamedTuple

from opto_ckt.parts.figure import Finding, FindingsError, Spread
from opto_ckt.parts.reader import Alternatives, Reader, refusal, shown, words_in
from opto_ckt.units import UnitError, read

SIDES = ("min", "typ", "max")

Sign = Literal["positive", "not negative", "not positive", "any"]
ALLOWS: Mapping[Sign, tuple[Callable[[float], bool], str]] = {
    "positive": (lambda value: value > 0, "above zero"),
    "not negative": (lambda value: value >= 0, "zero or above"),
    "not positive": (lambda value: value <= 0, "zero or below"),
    "any": (lambda value: True, ""),
}


class Unit(Reader):
    """Metadata of a field: the unit in which its text is read, an example, the sign that it may have.

    The field is a `Spread` or a `float`; it may be None or a word as well, or a tuple of points.
    """

    leaves_points = True

    def __init__(self, text: str, example: str = "", sign: Sign = "positive") -> None:
        self.text, self.example, self.sign = text, example, sign

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> Spread | float | str:
        """A spread where the field holds one, a number where it does not, or one of the words it may be."""
        words = words_in(kinds)
        if isinstance(value, str) and value in words:
            return value
        reader = self.read_spread if Spread in kinds else self.read_number
        try:
            return reader(value, from_file=from_file)
        except FindingsError as error:
            if not words:
                raise
            hint = f"; {', '.join(words)} would do too"
            raise FindingsError([Finding(path, message + hint) for path, message in error.findings]) from None

    def read_number(self, value: Any, *, from_file: bool) -> float:
        """One SI number from text with its unit, or, outside files, from a number."""
        number = self._read(value, from_file=from_file)
        allows, wanted = ALLOWS[self.sign]
        if not allows(number):
            raise refusal(f"{shown(value)} is not {wanted}; a figure {wanted} is expected{self._such_as}")
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
        if isinstance(value, bool) or not isinstance(value, str | int | float) or shown(value) == "a huge number":
            raise refusal(f"expected a figure{self._such_as}, got {shown(value)}")
        if not from_file and not isinstance(value, str):
            return float(value)
        try:
            return read(value, self.text)
        except UnitError as error:
            raise refusal(str(error)) from None


class Coefficient(NamedTuple):
    """A figure that sheets state in one of several units; `value` is in the SI unit of `unit`."""

    value: float
    unit: str


class EitherUnit(Reader):
    """Metadata of a `Coefficient`: the units in which its text may stand."""

    def __init__(self, *units: Unit) -> None:
        self.units = units

    def read(self, value: Any, kinds: Alternatives, *, from_file: bool) -> Coefficient:
        """The figure with the unit in which it was stated."""
        if isinstance(value, Coefficient):
            return value
        for unit in self.units if isinstance(value, str) else ():
            try:
                read(value, unit.text)
            except UnitError:
                continue
            return Coefficient(unit.read_number(value, from_file=True), unit.text)
        expected = " or ".join(f"in {unit.text} such as '{unit.example}'" for unit in self.units)
        raise refusal(f"expected a figure {expected}, got {shown(value)}")
