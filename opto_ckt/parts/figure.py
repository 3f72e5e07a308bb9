"""A figure as data sheets give it: typical value, limits, the words for it, what is assumed where they are silent."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from math import isfinite
from typing import NamedTuple


class Finding(NamedTuple):
    """One thing wrong, and the keys that lead to it from the table that was looked at."""

    path: tuple[str | int, ...]
    message: str

    def __str__(self) -> str:
        return f"{'.'.join(map(str, self.path))}: {self.message}" if self.path else self.message


class FindingsError(ValueError):
    """A value is not usable; carries every reason."""

    def __init__(self, findings: Iterable[Finding]) -> None:
        self.findings = tuple(findings)
        super().__init__("; ".join(map(str, self.findings)))


@dataclass(frozen=True, slots=True)
class Spread:
    """A figure with whatever the sheet gives of minimum, typical and maximum, in SI.

    >>> Spread(min=2.0, max=4.0).nominal
    3.0
    >>> Spread(typ=1.0).stated
    False
    """

    min: float | None = None
    typ: float | None = None
    max: float | None = None

    def __post_init__(self) -> None:
        given = [value for value in (self.min, self.typ, self.max) if value is not None]
        if not given:
            raise ValueError("one of min, typ, max is needed at least")
        if not all(map(isfinite, given)):
            raise ValueError("a figure is a finite number")
        if given != sorted(given):
            raise ValueError("min, typ and max stand in falling order; min ≤ typ ≤ max is needed")

    @property
    def nominal(self) -> float:
        """Typical value; the middle of the limits, or the one limit given, where the sheet has none."""
        if self.typ is not None:
            return self.typ
        given = [value for value in (self.min, self.max) if value is not None]
        return sum(given) / len(given)

    @property
    def low(self) -> float:
        """Least value: the sheet's minimum, else the nominal value."""
        return self.nominal if self.min is None else self.min

    @property
    def high(self) -> float:
        """Greatest value: the sheet's maximum, else the nominal value."""
        return self.nominal if self.max is None else self.max

    @property
    def stated(self) -> bool:
        """Whether the sheet gives a limit at all."""
        return self.min is not None or self.max is not None

    def scaled(self, factor: float) -> Spread:
        """The same spread with every value times one positive factor."""
        return Spread(*(None if value is None else value * factor for value in (self.min, self.typ, self.max)))


class Limits(NamedTuple):
    """What a figure may be: nominal, least, greatest; whether the spread is an assumption, not the sheet's."""

    nominal: float
    low: float
    high: float
    assumed: bool


class Assumed(NamedTuple):
    """Relative spread taken for a figure that the sheet gives as typical only: -low, +high."""

    low: float = 0.0
    high: float = 0.0

    def limits(self, spread: Spread) -> Limits:
        """The sheet's own limits where it states any, else the nominal value spread by the assumption."""
        if spread.stated or not (self.low or self.high):
            return Limits(spread.nominal, spread.low, spread.high, assumed=False)
        down, up = (self.low, self.high) if spread.nominal >= 0 else (-self.low, -self.high)
        return Limits(spread.nominal, spread.nominal * (1 - down), spread.nominal * (1 + up), assumed=True)


class Sheet(NamedTuple):
    """The words and symbols by which data sheets call a figure."""

    words: str
