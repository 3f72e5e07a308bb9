"""Exact values of the tee's parts, around the feedback that the stage wants."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import LARGEST_CHIP, Stage, summing_node
from opto_ckt.circuits.receivers.tia_tee.structure import capacitive, resistive
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import feedback_network, front_end, loop, second_order, transimpedance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write

RATIO = 5.0  #: of the tee to R1 where a real resistor would do; ours
OUTPUT_RESISTANCE = 4.99e3  #: R4: no burden to the op amp, far below R1; common practice [Ω]
ARM = 2.2e-12  #: C1 and C4 of a capacitive tee: far above the pads' own capacitance; common practice [F]
NOTHING = 1e-16  #: a capacitance up to here is left to strays [F]
ARM_SPREAD = 0.12  #: of a capacitive tee: three parts of 0.1 pF or 5 % each, taken together


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    stage = Stage(request, derivation, bench, summing_node(request, bench), others)
    if resistive(request):
        stage = replace(stage, resistors=lambda resistance: _resistors(request, resistance))
    if capacitive(request):
        arms = {**stage.capacitance, "C1 of the tee": ARM}
        stage = replace(stage, capacitance=arms, capacitors=_capacitors, spread=ARM_SPREAD, smallest=0.0)
    resistance, capacitor = feedback_pair(stage)
    resistors = _fitted_resistors(stage, resistance)
    capacitors = _fitted_capacitors(stage, capacitor)
    return (*resistors, *capacitors, *surroundings(request, derivation, others))


def _resistors(request: OpAmpReceiverRequest, resistance: float | Lanes) -> Values:
    """R1, R4 and R5 that are equal to a resistance: R1 as large as parts go, the larger the quieter."""
    plenty = np.asarray(resistance) >= 2 * LARGEST_CHIP
    first = request.fixed.get("R1") or np.where(plenty, LARGEST_CHIP, np.asarray(resistance) / RATIO)
    second = request.fixed.get("R4") or np.minimum(OUTPUT_RESISTANCE, first / 20)
    shunt = request.fixed.get("R5") or first * second / (resistance - first - second)
    return {"R1": first, "R4": second, "R5": shunt}


def _capacitors(capacitance: float | Lanes) -> Values:
    """C1, C4 and C5 that are equal to a capacitance; none where strays are enough."""
    wanted = np.asarray(capacitance, dtype=float)
    some = wanted > NOTHING
    arm = np.where(some, np.maximum(ARM, 2 * wanted), 0.0)
    return {"C1": arm, "C4": arm, "C5": np.where(some, arm**2 / np.where(some, wanted, 1.0) - 2 * arm, 0.0)}


def _fitted_resistors(stage: Stage, resistance: float) -> list[Fitted]:
    request, series, derivation = stage.request, stage.request.preferred.resistors.series, stage.derivation
    if not resistive(request):
        return [Fitted("R1", resistance, series, high=resistance, fixed="R1" in request.fixed)]
    exact = {ref: float(value) for ref, value in _resistors(request, resistance).items()}
    whole = derivation.compute(
        "tee", feedback_network.tee_resistance,
        reason=f"wanted: {derivation.reasons.get('R1', '')}",
        first=exact["R1"], second=exact["R4"], shunt=exact["R5"],
    )  # fmt: skip
    limit = "the largest usual chip" if exact["R1"] == LARGEST_CHIP else f"a {RATIO:g}th of what is wanted"
    derivation.note("R1", f"{limit}; with R4 and R5 equal to {write(whole, 'Ω')}: {derivation.reasons.get('R1', '')}")
    derivation.note("R4", f"{write(OUTPUT_RESISTANCE, 'Ω')} or a 20th of R1, common practice: no burden to U1")
    derivation.note("R5", f"R1 R4/(R - R1 - R4) for {write(whole, 'Ω')}")
    return [
        Fitted("R1", exact["R1"], series, high=exact["R1"], fixed="R1" in request.fixed),
        Fitted("R4", exact["R4"], series, low=exact["R4"] / 2, high=exact["R4"], fixed="R4" in request.fixed),
        Fitted("R5", exact["R5"], series, low=exact["R5"], fixed="R5" in request.fixed),
    ]


def _fitted_capacitors(stage: Stage, capacitor: Fitted) -> list[Fitted]:
    request, series, derivation = stage.request, stage.request.preferred.capacitors.series, stage.derivation
    if not capacitive(request):
        return [capacitor]
    exact = {ref: float(value) for ref, value in _capacitors(capacitor.exact).items()}
    if not exact["C1"]:
        for ref in exact:
            derivation.note(ref, "strays are more than the feedback wants: the tee stays empty")
        return [Fitted(ref, 0.0, series, omittable=True, fixed=ref in request.fixed) for ref in exact]
    step = derivation.of("C1")
    whole = derivation.compute(
        "capacitive tee", feedback_network.tee_capacitance,
        first=exact["C1"], second=exact["C4"], shunt=exact["C5"],
    )  # fmt: skip
    wanted = f"with C4 and C5 equal to {write(whole, 'F')}: {step.reason if step else ''}"
    derivation.note("C1", f"{write(ARM, 'F')}, far above its pads, common practice; {wanted}")
    derivation.note("C4", "as C1")
    derivation.note("C5", f"C1 C4/C - C1 - C4 for {write(whole, 'F')}")
    arms = [
        Fitted(ref, exact[ref], series, low=exact[ref] / 1.5, high=exact[ref] * 1.5, fixed=ref in request.fixed)
        for ref in ("C1", "C4")
    ]
    return [*arms, Fitted("C5", exact["C5"], series, fixed="C5" in request.fixed)]


FORMULAS = (
    feedback_network.tee_resistance,
    feedback_network.tee_capacitance,
    transimpedance.feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    loop.noise_gain,
    front_end.output_offset,
)
