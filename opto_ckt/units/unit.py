"""What a unit is: its spellings with the power of ten of each, and the steps in which it is written."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field


class UnitError(ValueError):
    """A text is not a value in the unit asked for; the message says what is wrong and what would do."""


Scale = tuple[int, int]
"""A whole multiple and a power of ten; kept apart so that a decimal figure is rounded only once."""

PREFIXES: Mapping[str, int] = {
    "f": -15, "p": -12, "n": -9, "u": -6, "µ": -6, "m": -3, "": 0, "k": 3, "M": 6, "G": 9, "T": 12,
}  # fmt: skip
ALL_PREFIXES = ("f", "p", "n", "µ", "m", "", "k", "M", "G", "T")  #: as they are written, smallest first


@dataclass(frozen=True)
class Step:
    """One way to write a unit: the power of ten that it takes off, and the magnitude from which it is used."""

    text: str
    exponent: int
    least: float


@dataclass(frozen=True)
class Unit:
    """One unit that a field may have."""

    si: str  #: in which the number stands inside
    example: str  #: what the refusals show
    spellings: Callable[[], Mapping[str, Scale]]  #: built when the unit is first read
    steps: tuple[Step, ...]  #: smallest first
    bare: bool = False  #: a number alone will do
    curves: Mapping[str, Callable[[float], float]] = field(default_factory=dict)  #: spellings that are no plain factor
    decimals: bool = False  #: written with a fixed number of decimals, as decibels are


def prefixed(*symbols: str, of: str = "fpnuµmkMGT", power: int = 1) -> dict[str, Scale]:
    """Every symbol bare and behind each prefix; a squared unit takes its prefix squared."""
    return {prefix + symbol: (1, power * PREFIXES[prefix]) for symbol in symbols for prefix in ("", *of)}


def plain(*symbols: str, exponent: int = 0) -> dict[str, Scale]:
    """Symbols that take no prefix."""
    return dict.fromkeys(symbols, (1, exponent))


def quotient(above: Mapping[str, Scale], below: Mapping[str, Scale]) -> dict[str, Scale]:
    """Every spelling of one unit over every spelling of another."""
    return {f"{a}/{b}": (x[0], x[1] - y[1]) for a, x in above.items() for b, y in below.items()}


def engineering(symbol: str, smallest: str = "f", largest: str = "T") -> tuple[Step, ...]:
    """One step for each prefix from the smallest to the largest, the blank one among them."""
    chosen = ALL_PREFIXES[ALL_PREFIXES.index(smallest) : ALL_PREFIXES.index(largest) + 1]
    return tuple(Step(prefix + symbol, PREFIXES[prefix], float(f"1e{PREFIXES[prefix]}")) for prefix in chosen)


def single(symbol: str) -> tuple[Step, ...]:
    """A unit that is written without prefixes."""
    return (Step(symbol, 0, 0.0),)
