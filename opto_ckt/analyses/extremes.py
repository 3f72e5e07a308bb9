"""Least and greatest of every figure over all limits, by coordinate search."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from opto_ckt.limits import (
    Corner,
    Evaluate,
    Lanes,
    Limits,
    Steps,
    Values,
    corner_of,
    effects,
    figures_at,
    least_favourable_steps,
    one_at_a_time,
    rounding,
    steps_of,
    varying,
)

ROUNDS = 4
FAR = 1e300  #: stands for what is beyond every number

Row = NDArray[np.int8]
Indices = NDArray[np.intp]


@dataclass(frozen=True)
class Extreme:
    """One figure at nominal and at the least and greatest found, with the corners where; nan counts as both."""

    nominal: float
    low: float
    high: float
    at_low: Corner
    at_high: Corner


def extremes(evaluate: Evaluate, limits: Limits, chosen: Values, names: Iterable[str]) -> dict[str, Extreme]:
    """Least and greatest of each figure that a coordinate search over all limits finds; found, not proven.

    Each limit alone at low and high; then for every figure and direction the corner of the worst levels; then each
    limit alone around the worst corner seen so far, and all the moves that made it worse together, until none does.
    Limits that do not matter to a figure at nominal are moved together first, and singly where that matters.
    A limit goes to its other end; back to nominal only where both ends of it are worse, or both better, than nominal.
    Every lane counts for every figure.

    Parameters
    ----------
    evaluate : figures by name for values by name, one entry a lane; a figure that is missing is nan.
    limits : limits of everything, tolerances of the fitted parts included.
    chosen : values of the fitted parts.
    names : figures looked for.
    """
    looked_for = tuple(names)
    return _Search(evaluate, limits, chosen, looked_for).run() if looked_for else {}


class _Search:
    """Lanes evaluated so far; a target is a figure (first half) or its negative (second half), the least is worst."""

    def __init__(self, evaluate: Evaluate, limits: Limits, chosen: Values, names: tuple[str, ...]) -> None:
        self.evaluate, self.limits, self.chosen, self.names = evaluate, limits, chosen, names
        alone = steps_of(limits, one_at_a_time(limits))
        self.steps: Steps = alone[:0]
        self.figures: Lanes = np.empty((len(names), 0))
        self.signed: Lanes = np.empty((2 * len(names), 0))
        self.noise: Lanes = np.zeros(2 * len(names))  #: what is rounding of each target
        self.lane: dict[bytes, int] = {}
        self.visit(alone)
        self.alone = self.figures.copy()
        self.effects = np.array([effects(figure) for figure in self.alone] * 2)
        self.matters = self.effects > self.noise[:, None]
        up = self.signed[:, 1:] > self.signed[:, :1]
        self.bent = self.matters & (up[:, 0::2] == up[:, 1::2])  #: both ends are worse, or both better, than nominal

    def run(self) -> dict[str, Extreme]:
        """The whole search."""
        explored: list[dict[int, Indices]] = [{} for _ in self.signed]  #: centre -> lanes around it, of each target
        jumps = [
            least_favourable_steps(figure, smallest=smallest) for smallest in (True, False) for figure in self.alone
        ]
        for _ in range(ROUNDS):
            self.visit(np.array(jumps))
            centres = self.worst()
            fresh = [target for target, centre in enumerate(centres) if centre not in explored[target]]
            if not fresh:
                break
            around = self.explore({target: int(centres[target]) for target in fresh})
            jumps = [self.jump(target, int(centres[target]), lanes) for target, lanes in around.items()]
            for target, lanes in around.items():
                explored[target][int(centres[target])] = lanes
        self.visit(np.array(jumps))
        centres = self.worst()
        left = {target: int(centre) for target, centre in enumerate(centres) if centre not in explored[target]}
        for target, lanes in self.explore(left).items() if left else ():
            explored[target][left[target]] = lanes
        return self.found(explored)

    def explore(self, centres: Mapping[int, int]) -> dict[int, Indices]:
        """Lanes around the centre of each target, evaluated."""
        probes = {target: self.probes(target, self.steps[lane]) for target, lane in centres.items()}
        around = {target: self.around(target, self.steps[lane]) for target, lane in centres.items()}
        self.visit(np.concatenate([*around.values(), *probes.values()]))
        for target, lane in centres.items():
            if self.telling(target, lane, self.lanes(probes[target])).any():
                self.matters[target] = True
                around[target] = self.around(target, self.steps[lane])
        self.visit(np.concatenate([*around.values()]))
        return {target: self.lanes(rows) for target, rows in around.items()}

    def visit(self, steps: Steps) -> None:
        """Evaluate the corners that have not been evaluated yet, all in one call."""
        new = []
        for index, key in enumerate(map(bytes, steps)):
            if key not in self.lane:
                self.lane[key] = len(self.lane)
                new.append(index)
        if new:
            figures = figures_at(self.evaluate, self.limits, steps[new], self.chosen, self.names)
            signed = np.nan_to_num([*figures, *-figures], nan=-FAR, posinf=0.9 * FAR, neginf=-0.9 * FAR)
            self.steps = np.concatenate([self.steps, steps[new]])
            self.figures = np.concatenate([self.figures, figures], axis=1)
            self.signed = np.concatenate([self.signed, signed], axis=1)
            self.noise = np.tile(np.maximum(self.noise[: len(figures)], [rounding(figure) for figure in figures]), 2)

    def lanes(self, steps: Steps) -> Indices:
        """Where corners stand among the lanes."""
        return np.array([self.lane[key] for key in map(bytes, steps)], dtype=np.intp)

    def worst(self) -> Indices:
        """Lane of each target's worst; the first of those that differ by no more than rounding."""
        near = self.signed <= self.signed.min(axis=1, keepdims=True) + self.noise[:, None]
        return np.asarray(near.argmax(axis=1))

    def around(self, target: int, centre: Row) -> Steps:
        """Each limit that matters to a target moved alone; one that is off nominal may matter here only."""
        telling = self.matters[target] | (centre != 0)
        moves = [
            (column, level)
            for level, where in (
                (-1, telling & (centre != -1)),
                (1, telling & (centre != 1)),
                (0, self.bent[target] & (centre != 0)),
            )
            for column in np.flatnonzero(where)
        ]
        rows = np.repeat(centre[None, :], len(moves), axis=0)
        for row, (column, level) in zip(rows, moves, strict=True):
            row[column] = level
        return rows

    def probes(self, target: int, centre: Row) -> Steps:
        """All limits that do not matter at nominal moved together, in three ways: whether one of them does here."""
        idle = ~self.matters[target] & (centre == 0)
        turns = np.where(np.arange(len(centre)) % 2, 1, -1).astype(np.int8)
        return np.array([np.where(idle, moved, centre) for moved in (-1, 1, turns)], dtype=np.int8)

    def telling(self, target: int, centre: int, lanes: Indices) -> NDArray[np.bool_]:
        """Which lanes differ from a centre by more than rounding."""
        return np.asarray(np.abs(self.signed[target, lanes] - self.signed[target, centre]) > self.noise[target])

    def jump(self, target: int, centre: int, lanes: Indices) -> Row:
        """All moves that alone make a target worse, made together."""
        worse = lanes[self.signed[target, lanes] < self.signed[target, centre] - self.noise[target]]
        worst_last = worse[np.argsort(-self.signed[target, worse], kind="stable")]
        home: Row = self.steps[centre]
        jumped = home.copy()
        for lane in worst_last:
            column = (self.steps[lane] != home).argmax()
            jumped[column] = self.steps[lane, column]
        return jumped

    def found(self, explored: Sequence[Mapping[int, Indices]]) -> dict[str, Extreme]:
        """Extremes with their corners: what weighs most there first, what makes no difference there left out."""
        worst = self.worst()
        rows = self.steps[worst]
        weights = self.effects.copy()
        for target, centre in enumerate(worst):
            lanes = explored[target].get(int(centre), worst[:0])
            if len(lanes):
                weights[target] = self.weights(target, int(centre), lanes)
                rows[target, weights[target] <= self.noise[target]] = 0
        self.visit(rows)
        trimmed = self.lanes(rows)
        targets = np.arange(len(worst))
        kept = self.signed[targets, trimmed] <= self.signed[targets, worst] + self.noise
        at = np.where(kept, trimmed, worst)
        half = len(self.names)
        values = self.figures[targets % half, at]
        names = varying(self.limits)
        corners = [corner_of(names, self.steps[lane], weights[target]) for target, lane in enumerate(at)]
        return {
            name: Extreme(
                nominal=float(self.figures[low, 0]),
                low=float(values[low]),
                high=float(values[low + half]),
                at_low=corners[low],
                at_high=corners[low + half],
            )
            for low, name in enumerate(self.names)
        }

    def weights(self, target: int, centre: int, lanes: Indices) -> Lanes:
        """By how much each limit, moved away alone, changes a target at a centre; nothing for those not moved."""
        found = np.zeros(len(self.steps[centre]))
        columns = (self.steps[lanes] != self.steps[centre]).argmax(axis=1)
        np.maximum.at(found, columns, np.abs(self.signed[target, lanes] - self.signed[target, centre]))
        return found
