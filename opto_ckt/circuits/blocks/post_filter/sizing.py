"""Exact values of the filter: those of its polynomial, moved until receiver and filter together have the band."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any, NamedTuple

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.blocks.post_filter.structure import asked
from opto_ckt.circuits.receivers.board import BYPASS
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import filters
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

SOURCE = 200.0  #: R20 of a ladder: the op amp drives it with ease, its parts have usual values; common practice [Ω]
RC_RESISTANCE = 500.0  #: R20 of an RC section; common practice [Ω]
SECTION_RESISTANCE = 1e3  #: of active sections: quiet, and far above an op amp's output; common practice [Ω]
LOAD_SHARE = 20.0  #: the source resistance is at most this part of the load
FARTHEST = np.geomspace(1.0, 12.0, 121)  #: half-power frequency of the filter alone over the band of both


class Recipe(NamedTuple):
    """How a part's value follows from the filter's half-power frequency."""

    formula: Callable[..., Any]
    inputs: Mapping[str, Any]


Parts = Callable[[float | Lanes], dict[str, "Recipe | float"]]
"""A recipe, or a value that does not depend on it, for each part at a half-power frequency."""


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """Every part of the filter with its exact value and window.

    Raises
    ------
    InfeasibleError : the receiver by itself is slower than the band asked for.
    """
    wanted = asked(request)
    parts = {"rc": _rc, "active": _active, "ladder": _ladder}[wanted.form](request)
    bypass = dict.fromkeys(_bypass(request), BYPASS)
    bandwidth = bench.evaluate({**exact, **bypass, **_values(parts(wanted.cutoff * FARTHEST))})["bandwidth"]
    alone = wanted.cutoff * _where(FARTHEST, bandwidth, wanted.cutoff)
    if not np.isfinite(alone):
        most = float(np.nanmax(bandwidth, initial=0.0))
        raise InfeasibleError(
            f"receiver and filter together reach {write(most, 'Hz')} of the {write(wanted.cutoff, 'Hz')} asked for",
            [f"blocks.post_filter.cutoff ≤ {write(most, 'Hz')}", "a faster op amp", "less transimpedance"],
        )
    values = _derived(request, derivation, parts(alone), alone)
    return (*(_fitted(request, ref, value) for ref, value in values.items()), *_bypassed(request, derivation))


def _values(parts: Mapping[str, Recipe | float]) -> dict[str, float | Lanes]:
    return {
        ref: recipe.formula(**recipe.inputs) if isinstance(recipe, Recipe) else recipe for ref, recipe in parts.items()
    }


def _derived(
    request: ReceiverRequest, derivation: Derivation, parts: Mapping[str, Recipe | float], alone: float
) -> dict[str, float]:
    """Exact values, each with its formula and reason."""
    wanted, found = asked(request), {}
    name = f"{wanted.response} {wanted.form} of order {wanted.order}"
    reason = f"{name}, {write(alone, 'Hz')} by itself, {write(wanted.cutoff, 'Hz')} together with the receiver"
    for ref, recipe in parts.items():
        if isinstance(recipe, Recipe):
            found[ref] = derivation.compute(ref, recipe.formula, reason=reason, **recipe.inputs)
        else:
            derivation.note(ref, "common practice: easily driven, quiet, usual values of the others")
            found[ref] = float(recipe)
    return found


def _where(tried: Lanes, found: Lanes, wanted: float) -> float:
    """Least of the factors tried at which the bandwidth reaches what is wanted; nan where none does."""
    reached = np.flatnonzero(found >= wanted)
    if not len(reached):
        return float("nan")
    index = int(reached[0])
    if index == 0:
        return float(tried[0])
    share = np.log(wanted / found[index - 1]) / np.log(found[index] / found[index - 1])
    return float(tried[index - 1] * (tried[index] / tried[index - 1]) ** share)


def polynomial(request: ReceiverRequest) -> filters.Coefficients:
    """Denominator of the filter asked for."""
    wanted = asked(request)
    return {"bessel": filters.bessel, "flat": filters.butterworth}[wanted.response](wanted.order)


def source_resistance(request: ReceiverRequest, usual: float) -> float:
    """R20: as asked for, else the usual one, or less where the load would divide the signal. [Ω]"""
    load = request.load.resistance
    return request.fixed.get("R20", usual if load is None else min(usual, load / LOAD_SHARE))


def _rc(request: ReceiverRequest) -> Parts:
    resistance = source_resistance(request, RC_RESISTANCE)
    return lambda corner: {
        "R20": resistance,
        "C20": Recipe(filter_capacitance, {"resistance": resistance, "corner": corner}),
    }


def _ladder(request: ReceiverRequest) -> Parts:
    resistance = source_resistance(request, SOURCE)
    elements = filters.ladder(polynomial(request))
    inductors = [bool(left % 2 == 0) for left in range(len(elements), 0, -1)]

    def parts(corner: float | Lanes) -> dict[str, Recipe | float]:
        found: dict[str, Recipe | float] = {"R20": resistance}
        for index, (normalised, inductor) in enumerate(zip(elements, inductors, strict=True)):
            number = inductors[:index].count(inductor)
            formula = filters.scaled_inductance if inductor else filters.scaled_capacitance
            inputs = {"normalised": normalised, "resistance": resistance, "frequency": corner}
            found[f"{'L' if inductor else 'C'}2{number}"] = Recipe(formula, inputs)
        return found

    return parts


def _active(request: ReceiverRequest) -> Parts:
    pairs = filters.sections(polynomial(request))

    def parts(corner: float | Lanes) -> dict[str, Recipe | float]:
        found: dict[str, Recipe | float] = {}
        for index, (ratio, quality) in enumerate(pairs):
            first, second = f"2{2 * index}", f"2{2 * index + 1}"
            inputs = {"resistance": SECTION_RESISTANCE, "frequency": ratio * corner, "quality": quality}
            found |= {
                f"R{first}": SECTION_RESISTANCE,
                f"R{second}": SECTION_RESISTANCE,
                f"C{first}": Recipe(filters.sallen_key_feedback_capacitance, inputs),
                f"C{second}": Recipe(filters.sallen_key_ground_capacitance, inputs),
            }
        return found

    return parts


def _fitted(request: ReceiverRequest, ref: str, value: float) -> Fitted:
    preferred = request.preferred
    series = {"R": preferred.resistors.series, "C": preferred.capacitors.series, "L": preferred.inductors.series}
    exact = request.fixed.get(ref, value)
    return Fitted(ref, exact, series[ref[0]], low=exact / 1.4, high=exact * 1.4, fixed=ref in request.fixed)


def _bypass(request: ReceiverRequest) -> list[str]:
    if asked(request).form != "active":
        return []
    sides = (6, 7) if request.conditions.supply.negative else (6,)
    return [f"C2{side + 2 * index}" for index in range(asked(request).order // 2) for side in sides]


def _bypassed(request: ReceiverRequest, derivation: Derivation) -> list[Fitted]:
    found = []
    for ref in _bypass(request):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        series = request.preferred.bypass.series
        found.append(Fitted(ref, value, series, low=value, high=value, fixed=ref in request.fixed))
    return found
