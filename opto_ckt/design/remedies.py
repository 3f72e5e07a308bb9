"""What would have to move for a missed requirement to be met: each lever alone, everything else sized anew."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from opto_ckt.analyses.corners import tolerances_of
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.errors import InfeasibleError
from opto_ckt.limits import Corner, Limit, Requirement, values_at
from opto_ckt.parts.record import Record, facts
from opto_ckt.units import write

STEPS = (1.25, 2.0, 4.0, 10.0)  #: how far a lever is moved, either way, before it is given up
REFINEMENTS = 5
PASSIVE_UNITS = {"R": "Ω", "C": "F", "L": "H"}


def remedies(model: Model, requirement: Requirement, at: Corner) -> tuple[str, ...]:
    """Levers that alone would do, such as ``U1 gain bandwidth ≥ 310 MHz``; at exact values, at one corner."""
    found = []
    for lever in model.circuit.levers:
        nominal = _nominal(model, lever)
        if not nominal:
            continue
        for direction, sign in ((1, "≥"), (-1, "≤")):
            factor = _least_factor(lambda f, lever=lever: _margin(model, lever, f, requirement, at), direction)  # type: ignore[misc]
            if factor is not None:
                found.append(f"{_words(lever)} {sign} {write(nominal * factor, _unit(model, lever))}")
                break
    return tuple(found)


def _nominal(model: Model, lever: str) -> float:
    if lever in model.limits:
        return float(model.limits[lever].at("nominal", 0.0))
    if lever in model.request.fixed:
        return float(model.request.fixed[lever])
    fitted = model.circuit.propose(model.request, Derivation(), model.bench())
    return next((part.exact for part in fitted if part.ref == lever), 0.0)


def _least_factor(margin: Callable[[float], float], direction: int) -> float | None:
    """Smallest move, as a factor, that turns the margin positive; None if none of `STEPS` does."""
    missed = 1.0
    for step in STEPS:
        factor = step**direction
        if margin(factor) >= 0:
            met = factor
            break
        missed = factor
    else:
        return None
    for _ in range(REFINEMENTS):
        middle = (missed * met) ** 0.5
        if margin(middle) >= 0:
            met = middle
        else:
            missed = middle
    return met


def _margin(model: Model, lever: str, factor: float, requirement: Requirement, at: Corner) -> float:
    """Margin at the corner with one lever moved and the rest sized anew, unrounded."""
    if lever in model.limits:
        limit = model.limits[lever]
        if not isinstance(limit, Limit):
            return -np.inf
        scaled = Limit(limit.nominal * factor, limit.low * factor, limit.high * factor, limit.assumed)
        moved = model.moved({lever: scaled})
    else:
        fixed = {**model.request.fixed, lever: _nominal(model, lever) * factor}
        moved = Model(model.circuit, model.request.model_copy(update={"fixed": fixed}))
        moved.__dict__["network"] = model.network
    try:
        fitted = moved.circuit.propose(moved.request, Derivation(), moved.bench())
    except InfeasibleError:
        return -np.inf
    limits = {**moved.limits, **tolerances_of([moved.topology[part.ref] for part in fitted], moved.request)}
    figures = moved.evaluate(values_at(limits, [at], {part.ref: part.exact for part in fitted}))
    return float(requirement.margin(np.atleast_1d(figures[requirement.figure]))[0])


def _words(lever: str) -> str:
    return lever.replace(".", " ").replace("_", " ")


def _unit(model: Model, lever: str) -> str:
    ref, _, figure = lever.partition(".")
    if not figure:
        return PASSIVE_UNITS[ref[0]]
    element = next((element for element in model.topology if element.ref == ref), None)
    if element is None or not element.table:
        return "V"
    record: Record = getattr(model.request, element.table)
    return facts(type(record))[figure].unit
