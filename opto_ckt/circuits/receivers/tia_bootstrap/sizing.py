"""Exact values of the bootstrapped stage's parts, each with its window."""

from __future__ import annotations

from dataclasses import replace

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.detector import noise_frequency, wanted_bandwidth
from opto_ckt.circuits.receivers.feedback.pair import feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.circuits.receivers.tia_bootstrap import follower
from opto_ckt.circuits.receivers.tia_bootstrap.bias import BARELY, coupling, feeding, rest_current
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import (
    front_end,
    junction_fet,
    noise,
    reference,
    second_order,
    transimpedance,
    transimpedance_limits,
    transistor,
)
from opto_ckt.limits import Values
from opto_ckt.request import BootstrapRequest
from opto_ckt.request.reading import Limit as Bound
from opto_ckt.units import write

DECIDES = ("J1.saturation_current", "J1.pinch_off_voltage")  #: limits of the follower that change its gain most


def propose(request: BootstrapRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    The follower comes first: it says how much of the detector's capacitance is left, and how much of the bandwidth.
    R1 is sized for the weakest follower, C1 for the nominal one.

    Raises
    ------
    InfeasibleError : the follower is slower than the signal or starves, the output has no headroom, or no C1 both
        damps the response and keeps the op amp stable.
    """
    others = level_values(request, derivation, bench)
    r5 = feeding(request, derivation, bench)
    r4 = rest_current(request, derivation, bench, r5)
    c4 = request.fixed.get("C4", 1e-6)
    others |= {"R4": r4, "R5": r5, "C4": c4}
    weak, usual = at_rest(request, bench, others, weakest=True), at_rest(request, bench, others)
    _said(derivation, usual)
    worst = _faster(_stage(request, derivation, bench, weak, others), weak)
    stage = _stage(request, derivation, bench, usual, others)
    r1, c1 = feedback_pair(stage, worst)
    c4 = coupling(request, derivation, bench, r1, r5)
    resistors, bypass = request.preferred.resistors.series, request.preferred.bypass.series
    return (
        Fitted("R1", r1, resistors, high=r1, fixed="R1" in request.fixed),
        c1,
        Fitted("R4", r4, resistors, low=0.95 * r4, high=1.05 * r4, fixed="R4" in request.fixed),
        Fitted("R5", r5, resistors, high=r5, fixed="R5" in request.fixed),
        Fitted("C4", c4, bypass, low=c4, fixed="C4" in request.fixed),
        *surroundings(request, derivation, others),
    )


def at_rest(request: BootstrapRequest, bench: Bench, others: Values, *, weakest: bool = False) -> Values:
    """Values at nominal with J1 at rest; or with the least transconductance and the most capacitance."""
    values = {name: float(limit.at("nominal", 0.0)) for name, limit in bench.limits.items()} | dict(others)
    if weakest:
        low = ("J1.saturation_current",)
        high = ("J1.pinch_off_voltage", "J1.gate_source_capacitance", "J1.gate_drain_capacitance", "D1.capacitance")
        values |= {name: bench.low(name) for name in low} | {name: bench.high(name) for name in high}
    bias = request.detector.resting_bias
    values["D1.capacitance"] = float(request.detector.capacitance_at(bias, values["D1.capacitance"]))
    return {**values, **follower.resting(values, request, request.conditions.input_level)}


def input_capacitance(request: BootstrapRequest, bench: Bench, at: Values) -> dict[str, float]:
    """Capacitance of the summing node by where it comes from, with the follower as in the values given. [F]"""
    plain, left = summing_node(request, bench), 1 - float(follower.gain(at))
    plain.pop("D1 at its bias")
    return {
        "D1 bootstrapped": left * float(at["D1.capacitance"]),
        "J1 gate-source bootstrapped": left * float(at["J1.gate_source_capacitance"]),
        "J1 gate-drain": float(at["J1.gate_drain_capacitance"]),
        **plain,
    }


def itemised(request: BootstrapRequest, bench: Bench) -> dict[str, float]:
    """`input_capacitance` at nominal, with R4 and R5 as they are sized or fixed. [F]"""
    aside = Derivation()
    r5 = feeding(request, aside, bench)
    others = {"R4": rest_current(request, aside, bench, r5), "R5": r5}
    return input_capacitance(request, bench, at_rest(request, bench, others))


def _stage(
    request: BootstrapRequest, derivation: Derivation, bench: Bench, at: Values, others: dict[str, float]
) -> Stage:
    through_diode = noise.capacitance_current_noise(
        voltage_noise=bench.high("J1.voltage_noise"),
        capacitance=float(at["D1.capacitance"]),
        frequency=noise_frequency(request),
    )
    capacitance = input_capacitance(request, bench, at)
    return Stage(request, derivation, bench, capacitance, others, other_noise=float(through_diode), decides=DECIDES)


def _faster(stage: Stage, weak: Values) -> Stage:
    """The stage asked for as much more bandwidth as the weakest follower takes away: the two add as squares."""
    request = stage.request
    wanted = wanted_bandwidth(request)
    if wanted is None:
        return stage
    pole = float(follower.own_bandwidth(weak))
    left = 1 - (wanted / pole) ** 2
    if left <= 0:
        raise InfeasibleError(
            f"the bootstrap is slower than the signal: with the R4 that is fixed the pole of the weakest J1 lies at"
            f" {write(pole, 'Hz')}, the bandwidth wanted is {write(wanted, 'Hz')}",
            ["a smaller R4, or none under [fixed]", f"bandwidth ≤ {write(pole / BARELY, 'Hz')}"],
        )
    asked = {**request.require, "bandwidth": Bound(min=wanted / left**0.5)}
    return replace(stage, request=request.model_copy(update={"require": asked}))


def _said(derivation: Derivation, at: Values) -> None:
    """Gain of the follower, the capacitance it leaves, and its own pole, with their formulas."""
    load = float(follower.load_resistance(at))
    gain = derivation.compute(
        "follower gain", transistor.follower_gain,
        transconductance=float(at["J1.transconductance"]), load_resistance=load,
    )  # fmt: skip
    derivation.compute(
        "capacitance left of detector and follower", front_end.bootstrapped_capacitance,
        diode=float(at["D1.capacitance"]), gate_drain=float(at["J1.gate_drain_capacitance"]),
        gate_source=float(at["J1.gate_source_capacitance"]), follower_gain=gain,
    )  # fmt: skip
    derivation.compute(
        "pole of the follower", junction_fet.bootstrap_bandwidth,
        transconductance=float(at["J1.transconductance"]), load_resistance=load,
        diode=float(at["D1.capacitance"]), gate_source=float(at["J1.gate_source_capacitance"]),
    )  # fmt: skip


FORMULAS = (
    front_end.bootstrapped_capacitance,
    transistor.follower_gain,
    junction_fet.self_biased_current,
    junction_fet.source_resistance,
    junction_fet.gate_reverse_voltage,
    junction_fet.transconductance,
    junction_fet.channel_noise_factor,
    junction_fet.bootstrap_bandwidth,
    junction_fet.least_transconductance,
    reference.filter_capacitance,
    noise.capacitance_current_noise,
    transimpedance.feedback_resistance,
    transimpedance_limits.largest_feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    front_end.output_offset,
    reference.upper_resistance,
)
