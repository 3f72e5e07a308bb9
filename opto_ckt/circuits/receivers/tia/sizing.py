"""Exact values of the transimpedance amplifier's parts, each with its window."""

from __future__ import annotations

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import front_end, loop, reference, second_order, transimpedance, transimpedance_limits
from opto_ckt.request import OpAmpReceiverRequest


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    r1, c1 = feedback_pair(Stage(request, derivation, bench, summing_node(request, bench), others))
    resistor = Fitted("R1", r1, request.preferred.resistors.series, high=r1, fixed="R1" in request.fixed)
    return (resistor, c1, *surroundings(request, derivation, others))


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
