"""Exact values of the transimpedance amplifier's parts, each with its window."""

from __future__ import annotations

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.capacitor import feedback_capacitor
from opto_ckt.circuits.receivers.feedback.resistor import feedback_resistance
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import front_end, loop, reference, second_order, transimpedance, transimpedance_limits
from opto_ckt.request import OpAmpReceiverRequest


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    R1 and C1 are sized twice: the overshoot that C1 leaves at its worst corner takes its share of the swing.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    stage = Stage(request, derivation, bench, summing_node(request, bench), others)
    overshoot = float(second_order.overshoot(quality=stage.quality)) if stage.quality > 0.5 else 0.0
    for _ in range(2):
        r1 = stage.fixed("R1") or feedback_resistance(stage, overshoot)
        c1, overshoot = feedback_capacitor(stage, r1)
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
