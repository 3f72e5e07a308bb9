"""Joint choice of preferred values for all fitted parts, judged at the corners that matter."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations, product
from math import inf, log, prod
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from opto_ckt.circuit import Fitted
from opto_ckt.limits import (
    NOMINAL,
    Corner,
    Evaluate,
    Lanes,
    Limits,
    Requirement,
    corner_of,
    distinct,
    effects,
    figures_at,
    least_favourable_steps,
    one_at_a_time,
    steps_of,
    varying,
)
from opto_ckt.preferred import commonness, nearest, neighbours
from opto_ckt.units import write

CANDIDATES = 5  #: series values tried for one part
EXHAUSTIVE = 1500  #: combinations up to which all are tried
ROUNDS = 5
ENOUGH = 0.05  #: margins are counted up to here
EDGE = 1e-9  #: share by which a value may pass the end of its window, for rounding
DIGITS = 9  #: decimals of margins and distances that are compared
UNITS: Mapping[str, str] = {"R": "Ω", "C": "F", "L": "H"}

Rows = NDArray[np.intp]
Chosen = TypeVar("Chosen")


@dataclass(frozen=True)
class Choice:
    """Values chosen for the fitted parts, and how they were found."""

    values: Mapping[str, float]  #: designator -> value; zero where the part is left out
    margins: tuple[float, ...]  #: worst found of each requirement, in their order
    corners: tuple[Corner, ...]  #: at which combinations were judged
    tried: int  #: combinations evaluated
    rounds: int
    exhaustive: bool  #: every combination of candidates was judged
    notes: tuple[str, ...]


def choose(
    fitted: tuple[Fitted, ...],
    evaluate: Evaluate,
    requirements: Sequence[Requirement],
    limits: Limits,
    known: Sequence[Corner] = (),
) -> Choice:
    """Preferred values with the largest smallest margin (counted up to 5 %), then nearest to the exact ones.

    Where no combination keeps every bound, those that miss fewest come first: a bound out of reach costs no other one.
    Combinations are judged at nominal and at corners put together from each limit's own worst level, for each
    requirement, first at the exact values and again at each winner until no new corner turns up. Further ties: fewer
    distinct lines, commoner series, candidates' order. The margins are the worst found, not proven. A part that may be
    left out, with a window that reaches down to zero, is left out wherever the margins allow.

    Parameters
    ----------
    fitted : exact value and window of each part.
    evaluate : figures by name for values by name, one entry a lane.
    requirements : what has to hold; a figure that is missing or nan counts as missed by far.
    limits : tolerance of each fitted part (none: it is exact) and limits of everything else.
    known : corners at which combinations are judged besides, such as a wider search found at an earlier choice.
    """
    free = tuple(part for part in fitted if not part.twin)
    options, notes = _options(free)
    bench = _Bench(free, evaluate, requirements, limits, {part.ref: part.twin for part in fitted if part.twin})
    search = _Search(bench, options)
    corners = distinct([NOMINAL, *known, *bench.worst({part.ref: part.exact for part in free})[0]])
    for rounds in range(1, ROUNDS + 1):
        winner = search.best(corners)
        values = search.values(winner)
        worst, margins = bench.worst(values)
        fresh = [corner for corner in distinct(worst) if corner not in corners]
        if not fresh or rounds == ROUNDS:
            break
        corners += fresh
    found = np.minimum(search.margins[search.place[winner]], margins)
    return Choice(
        values=bench.whole(values),
        margins=tuple(float(margin) for margin in found),
        corners=tuple(corners),
        tried=len(search.place),
        rounds=rounds,
        exhaustive=search.exhaustive,
        notes=notes,
    )


def _options(fitted: Sequence[Fitted]) -> tuple[list[list[float]], tuple[str, ...]]:
    """Candidates of each part, nearest to the exact value first; a note for each window that holds none."""
    options, notes = [], []
    for part in fitted:
        found = _candidates(part)
        if not found:
            found = [nearest(min(max(part.exact, part.low), part.high), part.series)]
            notes.append(_outside(part, found[0]))
        options.append(found)
    return options, tuple(notes)


def _candidates(part: Fitted) -> list[float]:
    """Series values in the window, the place left empty ahead of them where the part is one that may be spared.

    Raises
    ------
    ValueError : neither the exact value nor the window is positive, and the part may not be left out.
    """
    if part.fixed:
        return [part.exact]
    left_out = [0.0] if part.omittable and min(part.exact, part.low) <= 0 else []
    aim = part.exact if part.exact > 0 else part.low
    if not aim > 0 or part.high <= 0:
        if not left_out:
            raise ValueError(f"{part.ref}: no part has the value {part.exact:g} in {part.low:g} to {part.high:g}")
        return left_out
    low, high = part.low * (1 - EDGE), part.high * (1 + EDGE)
    return (left_out + neighbours(aim, part.series, CANDIDATES, low, high))[:CANDIDATES]


def _outside(part: Fitted, value: float) -> str:
    unit = UNITS.get(part.ref[:1], "1")
    series = part.series if isinstance(part.series, str) else "drawer's"
    low, high = (write(end, unit) for end in (part.low, part.high))
    window = f"from {low} up" if part.high == inf else f"{low} to {high}"
    return f"{part.ref}: no {series} value lies in its window, {window}; {write(value, unit, trim=True)} is the nearest"


class _Bench:
    """Margins of the requirements for any values of the fitted parts, at any corners."""

    def __init__(
        self,
        fitted: Sequence[Fitted],
        evaluate: Evaluate,
        requirements: Sequence[Requirement],
        limits: Limits,
        twins: Mapping[str, str],
    ) -> None:
        self.fitted, self.evaluate, self.requirements, self.limits = fitted, evaluate, requirements, limits
        self.twins = twins
        self.names = list(dict.fromkeys(requirement.figure for requirement in requirements))
        self.alone = steps_of(limits, one_at_a_time(limits))

    def whole(self, chosen: Mapping[str, Chosen]) -> dict[str, Chosen]:
        """Values chosen, with those of the parts that share them."""
        return {**chosen, **{ref: chosen[twin] for ref, twin in self.twins.items()}}

    def worst(self, values: Mapping[str, float]) -> tuple[list[Corner], Lanes]:
        """For each requirement the corner of worst levels around some values, and the worst margin on the way there."""
        if not self.requirements:
            return [], np.empty(0)
        figures = figures_at(self.evaluate, self.limits, self.alone, self.whole(values), self.names)
        corners, margins = [], []
        for requirement in self.requirements:
            figure = figures[self.names.index(requirement.figure)]
            steps = least_favourable_steps(figure, smallest=requirement.side == "min")
            corners.append(corner_of(varying(self.limits), steps, effects(figure)))
            margins.append(requirement.margin(figure).min())
        return corners, np.array(margins)

    def margins(self, values: Lanes, corners: Sequence[Corner]) -> Lanes:
        """Smallest margin over the corners, by combination (rows of values) and requirement."""
        if not self.requirements:
            return np.empty((len(values), 0))
        steps = np.repeat(steps_of(self.limits, corners), len(values), axis=0)
        chosen = {part.ref: np.tile(values[:, column], len(corners)) for column, part in enumerate(self.fitted)}
        figures = figures_at(self.evaluate, self.limits, steps, self.whole(chosen), self.names)
        by_requirement = [
            requirement.margin(figures[self.names.index(requirement.figure)]).reshape(len(corners), -1).min(axis=0)
            for requirement in self.requirements
        ]
        return np.stack(by_requirement, axis=1)


class _Search:
    """Combinations of candidates: each evaluated once a corner, when it is first asked for."""

    def __init__(self, bench: _Bench, options: Sequence[Sequence[float]]) -> None:
        self.bench, self.options = bench, options
        self.exhaustive = prod(map(len, options)) <= EXHAUSTIVE
        self.place: dict[tuple[int, ...], int] = {}
        self.margins: Lanes = np.empty((0, len(bench.requirements)))
        self.judged = np.empty(0, dtype=int)  #: at how many corners
        self.distances = [
            [abs(log(value / part.exact)) if value > 0 and part.exact > 0 else 0.0 for value in values]
            for part, values in zip(bench.fitted, options, strict=True)
        ]
        self.current = (0,) * len(options)

    def values(self, combination: tuple[int, ...]) -> dict[str, float]:
        """Designator to value."""
        parts = zip(self.bench.fitted, self.options, combination, strict=True)
        return {part.ref: values[index] for part, values, index in parts}

    def best(self, corners: Sequence[Corner]) -> tuple[int, ...]:
        """The best combination of all; of too many, the one that no exchange of one or two parts betters."""
        if self.exhaustive:
            return self._winner(list(product(*(range(len(values)) for values in self.options))), corners)
        while True:
            winner = self._winner(self._exchanged(self.current), corners)
            if winner == self.current:
                return winner
            self.current = winner

    def _exchanged(self, current: tuple[int, ...]) -> list[tuple[int, ...]]:
        """A combination and all that differ from it in one part or two, each once."""
        free = [part for part, values in enumerate(self.options) if len(values) > 1]
        found = {current: None}
        for first, second in combinations(free, 2):
            for pair in product(range(len(self.options[first])), range(len(self.options[second]))):
                changed = list(current)
                changed[first], changed[second] = pair
                found.setdefault(tuple(changed))
        return list(found)

    def _winner(self, pool: list[tuple[int, ...]], corners: Sequence[Corner]) -> tuple[int, ...]:
        """The first in rank: fewest bounds missed, smallest margin up to `ENOUGH`, then what `_rank` compares."""
        self._judge(pool, corners)
        rows = np.array([self.place[combination] for combination in pool])
        margins = self.margins[rows].round(DIGITS)
        missed = np.sum(margins < 0, axis=1)
        smallest = np.where(missed == missed.min(), np.min(margins, axis=1, initial=ENOUGH), -inf)
        ahead = [pool[index] for index in np.flatnonzero(smallest == smallest.max())]
        return min(ahead, key=self._rank)

    def _rank(self, combination: tuple[int, ...]) -> tuple[float, int, int, tuple[int, ...]]:
        """Distance from the exact values, distinct lines, how rare the values are, order of the candidates."""
        distance = sum(of_part[index] for of_part, index in zip(self.distances, combination, strict=True))
        values = self.values(combination)
        fitted = [(part, values[part.ref]) for part in self.bench.fitted if values[part.ref]]
        lines = {(part.ref[:1], part.series, value) for part, value in fitted}
        rarity = sum(commonness(value, part.series) for part, value in fitted)
        return round(distance, DIGITS), len(lines), rarity, combination

    def _judge(self, pool: list[tuple[int, ...]], corners: Sequence[Corner]) -> None:
        """Bring the margins of some combinations up to date with all corners."""
        new = [combination for combination in pool if combination not in self.place]
        self.place.update({combination: len(self.place) + index for index, combination in enumerate(new)})
        self.margins = np.vstack([self.margins, np.full((len(new), self.margins.shape[1]), inf)])
        self.judged = np.append(self.judged, np.zeros(len(new), dtype=int))
        rows = np.array([self.place[combination] for combination in pool])
        table = np.array([list(self.values(combination).values()) for combination in pool]).reshape(len(pool), -1)
        for done in sorted(set(self.judged[rows].tolist())):
            some = self.judged[rows] == done
            if done < len(corners):
                margins = self.bench.margins(table[some], corners[done:])
                self.margins[rows[some]] = np.minimum(self.margins[rows[some]], margins)
        self.judged[rows] = len(corners)
