"""Exact values of the transimpedance amplifier's parts, each with its window."""

from __future__ import annotations

from bisect import bisect_left
from dataclasses import replace

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.circuits.receivers.tia.structure import lifts_noise_gain
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import front_end, loop, reference, second_order, transimpedance, transimpedance_limits
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write

ROOM = 1.3  #: over the least capacitance that opens the window, so that preferred values lie in it; ours
ADDED = np.geomspace(0.1, 30, 32)  #: capacitance to ground that is tried, as multiples of what is there


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    stage = Stage(request, derivation, bench, summing_node(request, bench), others)
    added = added_capacitance(stage) if lifts_noise_gain(request) else None
    r1, c1 = feedback_pair(stage if added is None else loaded(stage, added.exact))
    resistor = Fitted("R1", r1, request.preferred.resistors.series, high=r1, fixed="R1" in request.fixed)
    return (resistor, c1, *((added,) if added else ()), *surroundings(request, derivation, others))


def loaded(stage: Stage, capacitance: float) -> Stage:
    """The stage with capacitance from the summing node to ground. [F]"""
    return replace(
        stage,
        capacitance={**stage.capacitance, **({"C3": capacitance} if capacitance else {})},
        others={**stage.others, "C3": capacitance},
    )


def added_capacitance(stage: Stage) -> Fitted:
    """C3, the least that opens a window for C1 between ringing and the minimum stable gain; none where it is open.

    Raises
    ------
    InfeasibleError : no capacitance to ground opens one.
    """
    series, fixed = stage.request.preferred.capacitors.series, stage.fixed("C3")
    if fixed is not None:
        return Fitted("C3", fixed, series, fixed=True)

    def opens(capacitance: float) -> bool:
        try:
            feedback_pair(replace(loaded(stage, capacitance), derivation=Derivation()))
        except InfeasibleError:
            return False
        return True

    if opens(0.0):
        stage.derivation.note("C3", "the noise gain at crossover is above the minimum stable gain without it")
        return Fitted("C3", 0.0, series, omittable=True)
    tried = stage.input_capacitance * ADDED
    opening = bisect_left(tried, True, key=opens)
    gain = stage.bench.nominal("U1.minimum_stable_gain")
    if opening == len(tried):
        raise InfeasibleError(
            f"with up to {write(float(tried[-1]), 'F')} from the summing node to ground, no C1 both damps the response"
            f" and leaves the noise gain of {gain:.3g} that U1 needs",
            ["an op amp of lower minimum stable gain", "a looser bound on peaking or phase margin"],
        )
    exact = ROOM * float(tried[opening])
    stage.derivation.note(
        "C3", f"lifts the noise gain to the {gain:.3g} that U1 needs, at every corner; costs bandwidth"
    )
    return Fitted("C3", exact, series, low=exact / ROOM, high=exact * ROOM)


FORMULAS = (
    transimpedance.feedback_resistance,
    transimpedance_limits.largest_feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.feedback_capacitance_for_bandwidth,
    transimpedance_limits.largest_feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    second_order.peaking,
    second_order.overshoot,
    loop.noise_gain,
    loop.crossover,
    loop.phase_margin_tangent,
    front_end.output_offset,
    reference.upper_resistance,
    reference.filter_capacitance,
)
