"""The main job: from a design file that was read to everything that was found for it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from itertools import product
from math import isnan
from typing import Any, Literal

import numpy as np

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.corners import Extreme, extremes, tolerances_of
from opto_ckt.analyses.faults import run_faults
from opto_ckt.analyses.thermal import worst_heat
from opto_ckt.choice import Choice, choose
from opto_ckt.circuit import Circuit, Fitted
from opto_ckt.derivation import Derivation
from opto_ckt.design.findings import assumed_spreads, cautions, head, noise_table
from opto_ckt.design.model import Model
from opto_ckt.design.partslist import parts_list
from opto_ckt.design.reading import ReadDesign
from opto_ckt.design.remedies import Remedies
from opto_ckt.errors import InputError
from opto_ckt.figures import FIGURES
from opto_ckt.limits import (
    NOMINAL,
    Corner,
    Figures,
    Level,
    Limits,
    Requirement,
    Values,
    distinct,
    one_at_a_time,
    values_at,
)
from opto_ckt.request import Request
from opto_ckt.request.reading import meant
from opto_ckt.result import FoundFigure, FoundRequirement, Result, Rounding, Scene
from opto_ckt.units import si_unit

SURROUNDINGS = ("temperature", "supply.", "signal.")  #: limits whose all combinations are tried for heat, load, faults
CHOSEN_ANEW = 3  #: times that values are chosen again for corners that only the wider search found


@dataclass(frozen=True)
class Sized:
    """A model with values chosen for its fitted parts."""

    model: Model
    fitted: tuple[Fitted, ...]
    limits: Limits  #: those of the model and the tolerances of the fitted parts
    choice: Choice
    derivation: Derivation
    requirements: tuple[Requirement, ...]
    asked: int  #: how many of them the design file asks for; the rest is implied


def size(read: ReadDesign, circuit: Circuit) -> Result:
    """Size the circuit of a design file, check it at its corners and gather what was found.

    Raises
    ------
    InputError : a figure is required that the circuit does not offer, or a part fixed that it does not have.
    InfeasibleError : no values exist that bias and stabilise the circuit.
    """
    model = Model(circuit, read.request)
    refuse_unknown(read, circuit, model)
    model = settled(model)
    circuit, request = model.circuit, model.request
    sized, found = search_corners(choose_values(model))
    corners = _corners(sized, found)
    lanes = values_at(sized.limits, corners, sized.choice.values)
    biased = model.biased(lanes)
    rows = _requirement_rows(sized, found)
    scenes = _scenes(sized, rows, found)
    heat = worst_heat(circuit, biased, request, corners)
    parts = parts_list(sized.model, sized.fitted, sized.choice, sized.derivation, sized.limits, biased)
    faults = run_faults(circuit, lanes, request)
    return Result(
        head=head(read, circuit),
        topology=model.topology,
        requirements=rows,
        figures=_figure_rows(circuit.offers, found),
        parts=parts,
        noise=noise_table(model, scenes[0].values),
        heat=heat,
        faults=faults,
        roundings=_roundings(sized),
        assumed=assumed_spreads(sized.limits),
        cautions=cautions(model, biased, sized.limits, parts, heat, sized.choice, faults),
        not_checked=circuit.not_checked,
        derivation=sized.derivation,
        scenes=scenes,
        noise_frequency=circuit.noise_frequency(request),
        noise_band=circuit.noise_band(request),
        limits=sized.limits,
        input_capacitance=circuit.input_capacitance(request, model.bench()) if circuit.input_capacitance else {},
    )


def choose_values(model: Model) -> Sized:
    """Exact values from the circuit, preferred values for all of them together."""
    circuit, request = model.circuit, model.request
    derivation = Derivation()
    fitted = model.proposal(derivation)
    elements = [model.topology[part.ref] for part in fitted]
    limits = {**model.limits, **tolerances_of(elements, request)}
    asked = _asked(request)
    implied = (each for each in circuit.implied(request) if not any(each.follows_from(other) for other in asked))
    requirements = (*asked, *implied)
    choice = choose(fitted, model.evaluate, requirements, limits)
    return Sized(model, fitted, limits, choice, derivation, requirements, len(asked))


def settled(model: Model) -> Model:
    """The model with what its request leaves to be found by trial: each trial is sized, at exact values."""

    def figures(request: Any) -> Figures:
        tried = model.asked(request)
        return tried.bench().evaluate({part.ref: np.array([part.exact]) for part in tried.proposal(Derivation())})

    request = model.circuit.settled(model.request, figures)
    return model if request is model.request else model.asked(request)


def search_corners(sized: Sized) -> tuple[Sized, dict[str, Extreme]]:
    """Extremes of every figure; values chosen anew where a bound is missed at a corner that the choice did not know."""
    model, offers = sized.model, sized.model.circuit.offers
    found = extremes(model.evaluate, sized.limits, sized.choice.values, offers)
    for _ in range(CHOSEN_ANEW):
        worst = [(need, _worst(need, found)) for need in sized.requirements]
        missed = [at for need, (value, at) in worst if need.margin(value) < 0 and at not in sized.choice.corners]
        if not missed:
            break
        known = (*sized.choice.corners, *missed)
        choice = choose(sized.fitted, model.evaluate, sized.requirements, sized.limits, known)
        if choice.values == sized.choice.values:
            break
        sized = replace(sized, choice=choice)
        found = extremes(model.evaluate, sized.limits, choice.values, offers)
    return sized, found


def _worst(requirement: Requirement, found: Mapping[str, Extreme]) -> tuple[float, Corner]:
    extreme = found[requirement.figure]
    return (extreme.low, extreme.at_low) if requirement.side == "min" else (extreme.high, extreme.at_high)


def _asked(request: Request) -> list[Requirement]:
    sides: tuple[Literal["min"], Literal["max"]] = ("min", "max")
    return [
        Requirement(name, side, bound, FIGURES[name].scale)
        for name, limit in request.require.items()
        for side in sides
        if (bound := getattr(limit, side)) is not None
    ]


def _figure_rows(offers: Sequence[str], found: Mapping[str, Extreme]) -> tuple[FoundFigure, ...]:
    return tuple(
        FoundFigure(
            name, found[name].nominal, found[name].low, found[name].high, found[name].at_low, found[name].at_high,
            si_unit(FIGURES[name].unit),
        )
        for name in FIGURES
        if name in offers and not isnan(found[name].nominal)
    )  # fmt: skip


def _requirement_rows(sized: Sized, found: Mapping[str, Extreme]) -> tuple[FoundRequirement, ...]:
    """A row for every bound asked for, and for each implied one that is missed."""
    rows = []
    corners = distinct(corner for extreme in found.values() for corner in (extreme.at_low, extreme.at_high))
    exact = {part.ref: part.exact for part in sized.fitted}
    ways = Remedies(sized.model, exact, corners, sized.requirements)
    for index, requirement in enumerate(sized.requirements):
        extreme = found[requirement.figure]
        worst, at = _worst(requirement, found)
        met = bool(requirement.margin(worst) >= 0)
        if not met or index < sized.asked:
            unit = si_unit(FIGURES[requirement.figure].unit)
            remedies = () if met else ways.of(requirement, worst)
            rows.append(FoundRequirement(requirement, extreme.nominal, worst, at, unit, remedies))
    return tuple(rows)


def _corners(sized: Sized, found: Mapping[str, Extreme]) -> list[Corner]:
    """Corners for heat, load and faults: every one that a figure was worst at, and all combinations of surroundings."""
    names = [n for n, limit in sized.limits.items() if limit.varies and n.startswith(SURROUNDINGS)]
    levels: tuple[Level, ...] = ("low", "high")
    surroundings: list[Corner] = [dict(zip(names, ends, strict=True)) for ends in product(levels, repeat=len(names))]
    worst = [corner for extreme in found.values() for corner in (extreme.at_low, extreme.at_high)]
    singles = one_at_a_time(sized.limits)
    crossed = [{**single, **around} for single in singles for around in (surroundings[0], surroundings[-1])]
    return distinct([NOMINAL, *worst, *singles, *surroundings, *crossed])


def _scenes(sized: Sized, rows: Sequence[FoundRequirement], found: Mapping[str, Extreme]) -> tuple[Scene, ...]:
    """Nominal, and the two corners that matter most: of the requirements, else of the first figures."""
    wanted = [(f"{row.requirement.figure} {row.requirement.side}", row.at) for row in rows]
    wanted += [(f"{name} least", extreme.at_low) for name, extreme in found.items()]
    named: dict[frozenset[tuple[str, Level]], tuple[str, Corner]] = {}
    for name, corner in [("nominal", NOMINAL), *wanted]:
        named.setdefault(frozenset(corner.items()), (name, corner))
    chosen = list(named.values())[:3]
    model = sized.model
    biased = model.biased(values_at(sized.limits, [corner for _, corner in chosen], sized.choice.values))
    evaluation = model.evaluation(biased)
    frequency = model.circuit.noise_frequency(model.request)
    density = np.sqrt(noise.output_density(evaluation, frequency))
    with np.errstate(divide="ignore", invalid="ignore"):  # a dark LED answers nothing
        referred = density / np.abs(response.transfer_at(evaluation, frequency))
    expected = {
        **model.circuit.figures(biased, evaluation, model.request),
        "output_noise_density": density,
        "settling_time": response.settling_time(evaluation),
        "signal_noise_density": referred,
    }

    def lane(values: Values, index: int) -> dict[str, float]:
        return {key: float(np.broadcast_to(value, len(chosen))[index]) for key, value in values.items()}

    return tuple(
        Scene(name, corner, lane(biased, index), lane(expected, index)) for index, (name, corner) in enumerate(chosen)
    )


def _roundings(sized: Sized) -> tuple[Rounding, ...]:
    """Figures at nominal with exact values beside those with preferred values."""
    exact = {part.ref: part.exact for part in sized.fitted}
    both = {ref: np.array([exact[ref], value]) for ref, value in sized.choice.values.items()}
    found = sized.model.bench().evaluate(both)
    figures = {name: np.broadcast_to(found[name], 2) for name in FIGURES if name in sized.model.circuit.offers}
    return tuple(
        Rounding(name, float(before), float(after), si_unit(FIGURES[name].unit))
        for name, (before, after) in figures.items()
        if not isnan(after)
    )


def refuse_unknown(read: ReadDesign, circuit: Circuit, model: Model) -> None:
    """Refuse figures that the circuit does not offer, parts that it does not have, and what it does not do."""
    fixable = sorted(element.ref for element in model.topology.fitted if element.chosen_from)
    offers = sorted(circuit.offers)
    unknown = [(("require", name), name, offers) for name in read.request.require if name not in circuit.offers]
    unknown += [(("fixed", ref), ref, fixable) for ref in read.request.fixed if ref not in fixable]
    problems = [
        read.source.problem(path, f"{circuit.name} has no {name}; it has {', '.join(allowed)}{meant(name, allowed)}")
        for path, name, allowed in unknown
    ]
    problems += [
        read.source.problem(("blocks", name), f"{circuit.name} has no place for it{_places(model)}; leave it out")
        for name in read.request.blocks_asked
        if name not in model.blocks
    ]
    problems += [read.source.problem(refusal.path, refusal.message) for refusal in model.circuit.refused(read.request)]
    if problems:
        raise InputError(problems)


def _places(model: Model) -> str:
    return f"; it has places for {', '.join(model.places)}" if model.places else ""
