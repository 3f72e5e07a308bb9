"""What may vary about a design, and settings of it: the vocabulary that the chooser and the corners share."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

Lanes = NDArray[np.float64]
Values = Mapping[str, float | Lanes]  #: name -> one number, or one entry a lane
Figures = Mapping[str, Lanes]
Evaluate = Callable[[Values], Figures]

Level = Literal["low", "nominal", "high"]
Corner = Mapping[str, Level]  #: levels of the limits that are not nominal
NOMINAL: Corner = {}

Steps = NDArray[np.int8]
"""Many corners at once: a row for each, a column for each limit that varies; -1 is low, 0 nominal, 1 high."""

LEVELS: tuple[Level, ...] = ("low", "nominal", "high")  #: in order of the steps -1, 0, 1
BLOCK = 20_000  #: most lanes that are evaluated in one call
FAR = 1e9  #: margin of what is missed, or kept, by far
ROUNDING = 1e-9  #: share of the largest figure below which a difference is rounding


@dataclass(frozen=True)
class Limit:
    """Nominal, low and high of one value."""

    nominal: float
    low: float
    high: float
    assumed: bool = False  #: the sheet states a typical figure only; the spread is ours or the engineer's

    @property
    def varies(self) -> bool:
        """Whether low or high differ from nominal."""
        return self.low != self.nominal or self.high != self.nominal

    def at(self, level: Level, chosen: float | Lanes) -> float | Lanes:
        """The value at a level; what was chosen for other parts does not matter."""
        return float(getattr(self, level))


@dataclass(frozen=True)
class Tolerance:
    """What a fitted part may deviate from the value chosen: makers' tolerance, temperature and ageing on top."""

    low: float  #: relative, not positive
    high: float  #: relative, not negative
    absolute: float = 0.0  #: replaces low and high of small capacitors [F]
    absolute_below: float = 0.0  #: below this value [F]
    assumed: bool = False
    drift_low: float = 0.0  #: by temperature and ageing, relative, not positive
    drift_high: float = 0.0  #: by temperature and ageing, relative, not negative

    @property
    def varies(self) -> bool:
        """Whether the part deviates at all."""
        return min(self.low, self.drift_low) < 0 or max(self.high, self.drift_high, self.absolute) > 0

    def at(self, level: Level, chosen: float | Lanes) -> float | Lanes:
        """The part's value at a level, given the value chosen; never below zero, and zero where it is left out."""
        if level == "nominal":
            return chosen
        sign, relative, drift = (-1, self.low, self.drift_low) if level == "low" else (1, self.high, self.drift_high)
        value = np.asarray(chosen, dtype=float)
        deviation = np.where(value < self.absolute_below, sign * self.absolute * np.sign(value), value * relative)
        found = np.maximum(value + deviation + value * drift, 0.0)
        return found if found.ndim else float(found)


Limits = Mapping[str, Limit | Tolerance]


@dataclass(frozen=True)
class Requirement:
    """One bound on one figure."""

    figure: str
    side: Literal["min", "max"]
    bound: float
    scale: float  #: what a deviation is measured against where the bound is small

    def margin(self, achieved: Lanes | float) -> Lanes:
        """Signed distance to the bound, as a share of max(\\|bound\\|, scale); nan counts as missed by far.

        Beside a bound and a scale of nothing any distance is a large one.
        """
        distance = np.asarray(achieved, dtype=float) - self.bound
        signed = distance if self.side == "min" else -distance
        measure = max(abs(self.bound), self.scale)
        share = signed / measure if measure else FAR * np.sign(signed)
        return np.nan_to_num(share, nan=-FAR, posinf=FAR, neginf=-FAR)

    def follows_from(self, other: Requirement) -> bool:
        """Whether the other bound, kept, leaves this one nothing to say."""
        return self.figure == other.figure and self.side == other.side and bool(self.margin(other.bound) >= 0)


def varying(limits: Limits) -> tuple[str, ...]:
    """Names of the limits that vary, in order: what the columns of `Steps` stand for."""
    return tuple(name for name, limit in limits.items() if limit.varies)


def one_at_a_time(limits: Limits) -> list[Corner]:
    """Nominal, then each limit that varies alone at low and alone at high."""
    corners: list[Corner] = [NOMINAL]
    for name in varying(limits):
        corners += [{name: "low"}, {name: "high"}]
    return corners


def steps_of(limits: Limits, corners: Sequence[Corner]) -> Steps:
    """Corners as rows of steps."""
    column = {name: index for index, name in enumerate(varying(limits))}
    steps = np.zeros((len(corners), len(column)), dtype=np.int8)
    for row, corner in enumerate(corners):
        for name, level in corner.items():
            if name in column:
                steps[row, column[name]] = LEVELS.index(level) - 1
    return steps


def values_at(limits: Limits, corners: Sequence[Corner] | Steps, chosen: Values) -> dict[str, float | Lanes]:
    """Values of every limit at each corner, one lane a corner; ``chosen`` holds the fitted parts' values.

    The values chosen are single numbers, or lanes of the same length as ``corners``.
    """
    steps = corners if isinstance(corners, np.ndarray) else steps_of(limits, corners)
    values: dict[str, float | Lanes] = dict(chosen)
    lanes = np.arange(len(steps))
    columns = iter(steps.T + 1)
    for name, limit in limits.items():
        levels = [limit.at(level, chosen.get(name, 0.0)) for level in LEVELS]
        if not limit.varies:
            values[name] = levels[1]
            continue
        column = next(columns)
        wide = any(np.ndim(value) for value in levels)
        values[name] = np.stack(np.broadcast_arrays(*levels))[column, lanes] if wide else np.array(levels)[column]
    return values


def figures_at(
    evaluate: Evaluate, limits: Limits, corners: Sequence[Corner] | Steps, chosen: Values, names: Sequence[str]
) -> Lanes:
    """Figures by name (rows) at each corner (columns), evaluated in blocks; nan where a figure is missing."""
    steps = corners if isinstance(corners, np.ndarray) else steps_of(limits, corners)
    found = np.full((len(names), len(steps)), np.nan)
    for start in range(0, len(steps), BLOCK):
        block = slice(start, start + BLOCK)
        some = {name: value[block] if isinstance(value, np.ndarray) else value for name, value in chosen.items()}
        figures = evaluate(values_at(limits, steps[block], some))
        for row, name in enumerate(names):
            if name in figures:
                found[row, block] = figures[name]
    return found


def least_favourable_steps(figure: Lanes, *, smallest: bool) -> NDArray[np.int8]:
    """Each limit's own worst step, given a figure over the lanes of `one_at_a_time`; nan is worse than any number."""
    signed = np.nan_to_num(figure if smallest else -figure, nan=-np.inf, posinf=np.inf, neginf=-np.inf)
    low, high = signed[1::2], signed[2::2]
    steps = np.where(low <= high, -1, 1).astype(np.int8)
    steps[np.minimum(low, high) >= signed[0] - rounding(figure)] = 0
    return steps


def least_favourable(limits: Limits, figure: Lanes, corners: Sequence[Corner], *, smallest: bool) -> Corner:
    """The corner put together from each limit's own worst level, given a one-at-a-time run from `one_at_a_time`."""
    if len(corners) != len(figure):
        raise ValueError(f"{len(figure)} lanes of a figure do not belong to {len(corners)} corners")
    return corner_of(varying(limits), least_favourable_steps(figure, smallest=smallest), effects(figure))


def effects(figure: Lanes) -> Lanes:
    """By how much each limit alone moves a figure, either way, given the figure over the lanes of `one_at_a_time`."""
    with np.errstate(invalid="ignore"):
        moved = np.nan_to_num(np.abs(figure[1:] - figure[0]), nan=np.inf, posinf=np.inf)
    moved[(figure[1:] == figure[0]) | (np.isnan(figure[1:]) & np.isnan(figure[0]))] = 0.0
    return np.asarray(np.maximum(moved[0::2], moved[1::2]))


def corner_of(names: Sequence[str], steps: NDArray[np.int8], weights: Lanes) -> Corner:
    """A row of steps as a corner, what weighs most first."""
    order = np.argsort(-weights, kind="stable")
    return {names[column]: LEVELS[steps[column] + 1] for column in order if steps[column]}


def rounding(figure: Lanes) -> float:
    """Differences of a figure up to here are rounding."""
    finite = figure[np.isfinite(figure)]
    return ROUNDING * float(np.max(np.abs(finite), initial=0.0))


def distinct(corners: Iterable[Corner]) -> list[Corner]:
    """Each corner once, in order."""
    seen: dict[frozenset[tuple[str, Level]], Corner] = {}
    for corner in corners:
        seen.setdefault(frozenset(corner.items()), corner)
    return list(seen.values())
