"""The E series of IEC 60063, and drawers of values that stand in for one."""

from __future__ import annotations

import math
from bisect import bisect_right
from collections.abc import Mapping
from types import MappingProxyType

Series = str | tuple[float, ...]
"""The name of an E series, or the values that a drawer holds."""

_LITERAL: Mapping[str, tuple[int, ...]] = {  # two digits; no rule gives all of E24
    "E3": (10, 22, 47),
    "E6": (10, 15, 22, 33, 47, 68),
    "E12": (10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82),
    "E24": (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91),
}
_EXCEPTION = {919: 920}  #: the one value of E192 that the rule misses


def _by_rule(count: int) -> tuple[int, ...]:
    """Three digits: the decade in equal ratios, rounded."""
    rounded = (round(100 * 10 ** (k / count)) for k in range(count))
    return tuple(_EXCEPTION.get(digits, digits) for digits in rounded)


SERIES: Mapping[str, tuple[float, ...]] = MappingProxyType(
    {name: tuple(digits / 10 for digits in row) for name, row in _LITERAL.items()}
    | {f"E{count}": tuple(digits / 100 for digits in _by_rule(count)) for count in (48, 96, 192)}
)
"""One decade of each series, coarsest first, from 1.0 to below 10. Source: IEC 60063."""

_TOLERANCES: Mapping[str, float] = {"E192": 0.005, "E96": 0.01, "E48": 0.02, "E24": 0.05, "E12": 0.1, "E6": 0.2}
_RANKS: Mapping[float, int] = {
    mantissa: rank for rank, row in reversed(list(enumerate(SERIES.values()))) for mantissa in row
}


def decade(series: str) -> tuple[float, ...]:
    """One decade of an E series, from 1.0 to below 10 (IEC 60063); ValueError for any other name.

    >>> decade("E6")
    (1.0, 1.5, 2.2, 3.3, 4.7, 6.8)
    """
    if series not in SERIES:
        raise ValueError(f"{series!r} is no E series; there are {', '.join(SERIES)}")
    return SERIES[series]


def values(series: Series, low: float, high: float) -> list[float]:
    """The values of a series within [low, high], smallest first.

    Raises ValueError for an unknown name, and for a window on an E series that is not positive and bounded.

    >>> values("E6", 1e3, 4.7e3), values((100.0, 10.0, 47.0), 20, 200)
    ([1000.0, 1500.0, 2200.0, 3300.0, 4700.0], [47.0, 100.0])
    """
    if isinstance(series, tuple):
        return sorted(value for value in set(series) if low <= value <= high)
    if not 0 < low < math.inf or not high < math.inf:
        raise ValueError(f"a window on {series} has to be positive and bounded, not {low} to {high}")
    if high < low:
        return []
    row = decade(series)
    found = (_value(row, index) for index in range(_place(row, low), _place(row, high) + 1))
    return [value for value in found if low <= value <= high]


def nearest(value: float, series: Series) -> float:
    """The series value nearest in ratio; the smaller of two that are equally near.

    Raises ValueError where the value is not positive or the drawer is empty.

    >>> nearest(4700, "E96"), nearest(1234, "E96")
    (4750.0, 1240.0)
    """
    found = neighbours(value, series, 1, 0.0, math.inf)
    if not found:
        raise ValueError("the drawer holds no positive value")
    return found[0]


def neighbours(exact: float, series: Series, count: int, low: float, high: float) -> list[float]:
    """The `count` series values within [low, high] that are nearest in ratio to the exact one, nearest first.

    Fewer where the window holds fewer. The exact value may lie outside the window; it and `high` have to be positive,
    else ValueError.

    >>> neighbours(24.5e3, "E96", 3, 20e3, 24.5e3)
    [24300.0, 23700.0, 23200.0]
    """
    if not 0 < exact < math.inf:
        raise ValueError(f"no series value is near {exact}; a positive figure is expected")
    if high <= 0 or high < low:
        return []
    if isinstance(series, tuple):
        candidates = [value for value in set(series) if value > 0]
    else:
        row = decade(series)
        centre = _place(row, min(max(exact, low), high))
        candidates = [_value(row, index) for index in range(centre - count, centre + count + 2)]
    inside = [value for value in candidates if low <= value <= high]
    return sorted(inside, key=lambda value: (round(abs(math.log(value / exact)), 12), value))[:count]


def commonness(value: float, series: Series = "E192") -> int:
    """How commonly a value is stocked, by the coarsest series that holds it: 0 for E3 … 6 for E192, 7 for none.

    What lies in a drawer is all equally at hand: 0. A value below or at zero is in no series.

    >>> commonness(4.7e3), commonness(4.75e3), commonness(4.71e3)
    (0, 5, 7)
    """
    if isinstance(series, tuple):
        return 0 if value in series else len(SERIES)
    if not 0 < value < math.inf:
        return len(SERIES)
    mantissa = float(f"{value:.9e}".split("e")[0])
    return _RANKS.get(mantissa, len(SERIES))


def series_for_tolerance(tolerance: float) -> str:
    """The series whose steps suit a tolerance: the finest whose own tolerance (IEC 60063) is not below it.

    >>> series_for_tolerance(0.01), series_for_tolerance(0.05), series_for_tolerance(0.001), series_for_tolerance(0.5)
    ('E96', 'E24', 'E192', 'E3')
    """
    return next((name for name, own in _TOLERANCES.items() if tolerance <= own * (1 + 1e-9)), "E3")


def _place(row: tuple[float, ...], value: float) -> int:
    """The place of the last series value that is not above a figure, counted through all decades from 1.0 on."""
    mantissa, power = f"{value:.15e}".split("e")
    return int(power) * len(row) + bisect_right(row, float(mantissa)) - 1


def _value(row: tuple[float, ...], place: int) -> float:
    """The series value at a place, as the float nearest to its decimal figure."""
    power, index = divmod(place, len(row))
    return float(f"{row[index]}e{power}")
