"""Exact values of the cascode stage's parts, each with its window."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from math import hypot

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import LEVEL_CURRENT, level_values, surroundings
from opto_ckt.circuits.receivers.detector import wanted_bandwidth
from opto_ckt.circuits.receivers.feedback import operation as feedback
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.circuits.receivers.tia_cascode import operation
from opto_ckt.circuits.receivers.tia_cascode.bias import FASTER, bias_parts
from opto_ckt.circuits.receivers.tia_cascode.transistor import stated_current
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import (
    common_base,
    front_end,
    noise,
    reference,
    second_order,
    transimpedance,
    transimpedance_limits,
    transistor,
)
from opto_ckt.request import CascodeRequest
from opto_ckt.request.reading import Limit as Bound

MOVES = ("supply.positive", "supply.negative", "temperature", "Q1.base_emitter_voltage", "Q1.current_gain")
"""Limits that part the two bias currents, the current gain, which hardly moves the pole, last."""

STIFFER = 10.0  #: current of the divider over that of the emitter: the base loads the level with the light; ours
APART = 1.013  #: of R4 and R5 from the values that balance: half a step of E96, for what they leave flows through R1


def propose(request: CascodeRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    The bias of the transistor comes first: it sets the pole at the emitter, which takes its share of the bandwidth,
    and what its two resistors leave of each other flows through R1.

    Raises
    ------
    InfeasibleError : the transistor is too slow for the signal or has no voltage, the output has no headroom, or no C1
        both damps the response and keeps the op amp stable.
    """
    parts = bias_parts(request, derivation, bench)
    stiff = max(LEVEL_CURRENT, STIFFER * float(stated_current(request, parts["R4"])))
    level = level_values(request, derivation, bench, stiff)
    others = level | parts
    left = worst_unbalanced(request, bench, others)
    stage = Stage(
        guarded(request), derivation, bench, behind_transistor(request, bench), others,
        other_noise=_steady_noise(bench, others), standing=left, decides=MOVES[:-1],
    )  # fmt: skip
    r1, c1 = feedback_pair(stage, _faster(stage))
    resistors = request.preferred.resistors.series
    return (
        Fitted("R1", r1, resistors, high=r1, fixed="R1" in request.fixed),
        c1,
        *(
            Fitted(ref, value, resistors, low=value / APART, high=value * APART, fixed=ref in request.fixed)
            for ref, value in parts.items()
        ),
        *surroundings(request, derivation, level),
    )


def guarded(request: CascodeRequest) -> CascodeRequest:
    """With a bound on the phase margin where none is asked for: the emitter's pole hides the peaking of the loop."""
    if "phase_margin" in request.require:
        return request
    return request.model_copy(update={"require": {**request.require, "phase_margin": Bound(min=feedback.LEAST_MARGIN)}})


def behind_transistor(request: CascodeRequest, bench: Bench) -> dict[str, float]:
    """Capacitance of the summing node by where it comes from: the detector is not there. [F]"""
    plain = summing_node(request, bench)
    plain.pop("D1 at its bias")
    return {"Q1 collector": bench.nominal("Q1.collector_capacitance"), **plain}


def worst_unbalanced(request: CascodeRequest, bench: Bench, others: dict[str, float]) -> float:
    """Most current in the direction of the signal that the bias currents leave of each other at any corner. [A]"""
    stock = request.preferred.resistors
    ends = [(bench.low(name), bench.high(name)) for name in MOVES]
    spread = [((1 - stock.tolerance) * others[ref], (1 + stock.tolerance) * others[ref]) for ref in ("R4", "R5")]
    rows = np.array(list(product(*ends, *spread)))
    nominal = {name: bench.nominal(name) for name in bench.limits} | others | {"R1": 1.0}
    moved = {name: rows[:, column] for column, name in enumerate((*MOVES, "R4", "R5"))}
    return max(float(np.max(operation.bias({**nominal, **moved}, request)["unbalanced_current"])), 0.0)


def _steady_noise(bench: Bench, others: dict[str, float]) -> float:
    """Of both bias resistors and the base current, as a current of the detector at low frequencies. [A/√Hz]"""
    hot = bench.high("temperature")
    thermal = [float(noise.thermal_current_noise(resistance=others[ref], temperature=hot)) for ref in ("R4", "R5")]
    current = bench.high("supply.positive") / others["R5"] / bench.low("Q1.current_gain")
    return hypot(*thermal, float(noise.shot_noise(current=current)))


def _faster(stage: Stage) -> Stage:
    """The stage asked for as much more bandwidth as the pole at the emitter takes away: the two add as squares."""
    wanted = wanted_bandwidth(stage.request)
    if wanted is None:
        return stage
    asked = {**stage.request.require, "bandwidth": Bound(min=wanted / (1 - FASTER**-2) ** 0.5)}
    return replace(stage, request=stage.request.model_copy(update={"require": asked}))


FORMULAS = (
    front_end.cascode_current,
    common_base.emitter_capacitance,
    common_base.input_pole,
    common_base.base_emitter_voltage,
    common_base.emitter_resistance,
    common_base.return_resistance,
    transistor.bipolar_transconductance,
    noise.shot_noise,
    noise.thermal_current_noise,
    transimpedance.feedback_resistance,
    transimpedance_limits.largest_feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    front_end.output_offset,
    reference.upper_resistance,
    reference.filter_capacitance,
)
