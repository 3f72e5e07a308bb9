"""Exact values of the feedback, once or twice."""

from __future__ import annotations

from dataclasses import replace

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.circuits.receivers.tia_balanced.structure import by_outputs
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import front_end, loop, second_order, transimpedance, transimpedance_limits
from opto_ckt.request import OpAmpReceiverRequest


def summing_capacitance(request: OpAmpReceiverRequest, bench: Bench) -> dict[str, float]:
    """Capacitance of a summing node by where it comes from, nominal. [F]"""
    items = summing_node(request, bench)
    return items if by_outputs(request) else {**items, "D2 at its bias": items["D1 at its bias"]}


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window; those of the second amplifier are those of the first.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    capacitance, subtracted = summing_capacitance(request, bench), not by_outputs(request)
    stage = Stage(request, derivation, bench, capacitance, others, both_ways=subtracted)
    if not subtracted:
        stage = replace(
            stage,
            resistors=lambda resistance: {"R1": resistance, "R4": resistance},
            capacitors=lambda capacitance: {"C1": capacitance, "C4": capacitance},
        )
    r1, c1 = feedback_pair(stage)
    resistor = Fitted("R1", r1, request.preferred.resistors.series, high=r1, fixed="R1" in request.fixed)
    parts = [resistor, c1]
    if by_outputs(request):
        for ref, like in (("R4", resistor), ("C4", c1)):
            derivation.note(ref, f"as {like.ref}: what is there twice has to match")
            own = request.fixed.get(ref)
            parts.append(
                replace(like, ref=ref, twin=like.ref) if own is None else replace(like, ref=ref, exact=own, fixed=True)
            )
    return (*parts, *surroundings(request, derivation, others))


FORMULAS = (
    transimpedance.feedback_resistance,
    transimpedance_limits.largest_feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    second_order.peaking,
    loop.noise_gain,
    front_end.output_offset,
)
