"""What would have to move for a missed requirement to be met: each lever alone, everything else sized anew."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from opto_ckt.analyses.corners import tolerances_of
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.errors import InfeasibleError
from opto_ckt.figures import FIGURES
from opto_ckt.limits import Corner, Figures, Lanes, Limit, Requirement, values_at
from opto_ckt.parts.record import Record, facts
from opto_ckt.units import write

STEPS = (1.25, 2.0, 4.0, 10.0)  #: how far a lever is moved before it is given up
REFINEMENTS = 5
WORSE = 0.01  #: loss of margin from which a move counts as the cause of a miss
PASSIVE_UNITS = {"R": "Ω", "C": "F", "L": "H"}


class Remedies:
    """Moves the circuit's levers, one at a time, and looks at the corners that were worst for any figure.

    Parameters
    ----------
    model : as it was sized.
    exact : exact values of its fitted parts.
    corners : at which a moved design is judged.
    others : every bound that has to be kept.
    """

    def __init__(
        self, model: Model, exact: dict[str, float], corners: Sequence[Corner], others: Sequence[Requirement]
    ) -> None:
        self._model = model
        self._corners = corners
        self._others = others
        self._levers = {
            lever: nominal for lever in model.circuit.levers if (nominal := exact.get(lever) or _nominal(model, lever))
        }
        self._moved: dict[tuple[str, float], Figures | None] = {}

    def of(self, requirement: Requirement, worst: float) -> tuple[str, ...]:
        """Levers that alone would do, such as ``U1 gain bandwidth ≥ 310 MHz``; at exact values.

        What such a move takes another bound past is told beside it; where no lever does, the bound that is in reach.
        """
        if any(self._margin(lever, 1.0, requirement) >= 0 for lever in self._levers):
            return ("a finer series or closer tolerance: unrounded values meet it",)
        found = []
        for lever, nominal in self._levers.items():
            up, down = (self._margin(lever, STEPS[0] ** way, requirement) for way in (1, -1))
            way = 1 if up > down else -1
            factor = self._least_factor(lever, way, requirement)
            if factor is not None:
                sign = "≥" if way > 0 else "≤"
                moved = f"{_words(lever)} {sign} {write(float(nominal) * factor, self._unit(lever))}"
                found.append(moved + self._cost(lever, factor, requirement))
        if requirement.figure == "overload":
            found.append(f"signal power max ≤ {_told('overload', worst)}")
        return tuple(found) or (self._in_reach(requirement, worst),)

    def _cost(self, lever: str, factor: float, wanted: Requirement) -> str:
        """What the move takes past its bound, or farther past it; nothing if all else stays as it was."""
        figures = self._moved[lever, factor] or {}
        lost: dict[str, str] = {}
        for other in self._others:
            here, there = self._margin(lever, 1.0, other), self._margin(lever, factor, other)
            if other.figure not in (wanted.figure, *lost) and there < min(0.0, here - WORSE):
                reached = float((np.min if other.side == "min" else np.max)(figures[other.figure]))
                lost[other.figure] = f"{other.figure} to {_told(other.figure, reached)} for {_bound(other)}"
        return f" but takes {', '.join(lost.values())}" if lost else ""

    def _in_reach(self, requirement: Requirement, worst: float) -> str:
        """The bound that could be asked for, where no lever within reach brings the one that is."""
        parts = " or ".join(dict.fromkeys(lever.partition(".")[0] for lever in self._levers))
        tried = f"; no figure of {parts} alone, changed up to {STEPS[-1]:.0f}-fold, does" if parts else ""
        return f"to ask for {_bound(replace(requirement, bound=worst))}{tried}"

    def _least_factor(self, lever: str, way: int, requirement: Requirement) -> float | None:
        """Smallest move, as a factor, that turns the margin positive; None if none of `STEPS` does."""
        missed = 1.0
        for step in STEPS:
            met = step**way
            if self._margin(lever, met, requirement) >= 0:
                break
            missed = met
        else:
            return None
        for _ in range(REFINEMENTS):
            middle = (missed * met) ** 0.5
            if self._margin(lever, middle, requirement) >= 0:
                met = middle
            else:
                missed = middle
        return met

    def _margin(self, lever: str, factor: float, requirement: Requirement) -> float:
        """Margin at the worst of the corners with one lever moved and the rest sized anew, unrounded."""
        if (lever, factor) not in self._moved:
            self._moved[lever, factor] = self._figures(lever, factor)
        figures = self._moved[lever, factor]
        return -np.inf if figures is None else float(np.min(requirement.margin(figures[requirement.figure])))

    def _figures(self, lever: str, factor: float) -> Figures | None:
        model = self._model
        if lever in model.limits:
            limit = model.limits[lever]
            if not isinstance(limit, Limit):
                return None
            scaled = Limit(limit.nominal * factor, limit.low * factor, limit.high * factor, limit.assumed)
            moved = model.moved(limits={lever: scaled})
        else:
            moved = model.moved(fixed={lever: float(self._levers[lever]) * factor})
        try:
            fitted = moved.proposal(Derivation())
        except InfeasibleError:
            return None
        limits = {**moved.limits, **tolerances_of([moved.topology[part.ref] for part in fitted], moved.request)}
        return moved.evaluate(values_at(limits, self._corners, {part.ref: part.exact for part in fitted}))

    def _unit(self, lever: str) -> str:
        ref, _, figure = lever.partition(".")
        if not figure:
            return PASSIVE_UNITS[ref[0]]
        element = next((element for element in self._model.topology if element.ref == ref), None)
        if element is None or not element.table:
            return "V"
        record: Record = getattr(self._model.request, element.table)
        return facts(type(record))[figure].unit


def _told(figure: str, value: float) -> str:
    return write(value, FIGURES[figure].unit)


def _bound(requirement: Requirement) -> str:
    return f"{'≥' if requirement.side == 'min' else '≤'} {_told(requirement.figure, requirement.bound)}"


def _nominal(model: Model, lever: str) -> float | Lanes:
    return model.limits[lever].at("nominal", 0.0) if lever in model.limits else 0.0


def _words(lever: str) -> str:
    return lever.replace(".", " ").replace("_", " ")
