"""Exact values of the load and of what is around the amplifier, each with its window."""

from __future__ import annotations

from math import inf

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.detector import (
    brightest,
    one_level,
    stage_bandwidth,
    wanted_transimpedance,
)
from opto_ckt.circuits.receivers.load_resistor.operation import headroom
from opto_ckt.circuits.receivers.load_resistor.structure import amplified, equalised
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import load_resistor, second_stage, transit
from opto_ckt.limits import Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write

TRIED = np.geomspace(1e-3, 3, 240)  #: loads tried, as multiples of that of one pole
EQUALISED_TO = 1.6  #: pole of the equaliser over the bandwidth wanted; ours
SHUNT = 249.0  #: R5: little noise, little load; common practice [Ω]
LEAST_LIFT = 1.2  #: below it an equaliser does nothing


def input_capacitance(request: OpAmpReceiverRequest, bench: Bench) -> dict[str, float]:
    """Capacitance across R1 by where it comes from, nominal. [F]"""
    capacitance = bench.nominal("D1.capacitance")
    return {
        "D1 at its bias": float(request.detector.capacitance_at(request.detector.resting_bias, capacitance)),
        "U1 common mode": bench.nominal("U1.common_capacitance"),
        "board": bench.nominal("CB"),
    }


def propose(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the input has no headroom, or no load reaches the bandwidth.
    """
    others = level_values(request, derivation, bench)
    shape = _equaliser if equalised(request) else _buffer
    parts = shape(request, derivation, bench, others)
    return (*parts, *surroundings(request, derivation, others))


def _buffer(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench, others: Values) -> list[Fitted]:
    """R1 from the bandwidth at its worst corner or from the swing; gain where more is asked for than it gives."""
    series = request.preferred.resistors.series
    candidates = {"swing": _swing_load(request, derivation, bench)}
    bandwidth = stage_bandwidth(request)
    if bandwidth is not None:
        candidates["bandwidth"] = _bandwidth_load(request, derivation, bench, others, bandwidth)
    bound = request.require.get("transimpedance")
    if bound is not None and bound.max and not amplified(request):
        candidates["transimpedance"] = bound.max / _most(request)
    load = _chosen(request, derivation, candidates)
    parts = [Fitted("R1", load, series, high=load, fixed="R1" in request.fixed)]
    if amplified(request):
        wanted = wanted_transimpedance(request) or load
        needed = derivation.compute(
            "gain of U1", second_stage.gain_for_transimpedance,
            reason=f"{write(wanted, 'V/A')} wanted of {write(load, 'Ω')}", transimpedance=wanted, first=load,
        )  # fmt: skip
        lower = request.fixed.get("R5", SHUNT)
        derivation.note("R5", f"{write(SHUNT, 'Ω')}, common practice: little noise, little load")
        upper = request.fixed.get("R4") or derivation.compute(
            "R4", second_stage.upper_feedback_resistance, reason=f"gain of {max(needed, 1.01):.3g}",
            gain=max(needed, 1.01), lower=lower,
        )  # fmt: skip
        parts += [
            Fitted("R4", upper, series, fixed="R4" in request.fixed),
            Fitted("R5", lower, series, low=lower / 1.5, high=lower * 1.5, fixed="R5" in request.fixed),
        ]
    return parts


def _equaliser(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench, others: Values) -> list[Fitted]:
    """R1 from swing or from the lift that the amplifier has left; zero on the pole of the input."""
    series, bandwidth = request.preferred.resistors.series, stage_bandwidth(request)
    capacitance = sum(input_capacitance(request, bench).values())
    candidates = {"swing": _swing_load(request, derivation, bench)}
    if bandwidth is not None:
        lift = bench.low("U1.gain_bandwidth") / (EQUALISED_TO * bandwidth)
        candidates["gain bandwidth"] = derivation.compute(
            "R1 from gain bandwidth", load_resistor.load_for_bandwidth,
            reason=f"U1 has {lift:.3g} of gain left at {write(EQUALISED_TO * bandwidth, 'Hz')}",
            capacitance=capacitance, bandwidth=EQUALISED_TO * bandwidth / lift,
        )  # fmt: skip
    load = _chosen(request, derivation, candidates)
    corner = EQUALISED_TO * (bandwidth or 1 / (2 * np.pi * load * capacitance))
    gain = derivation.compute(
        "lift of the equaliser", load_resistor.equaliser_gain,
        reason=f"input pole moved up to {write(corner, 'Hz')}",
        load_resistance=load, input_capacitance=capacitance, corner=corner,
    )  # fmt: skip
    if gain < LEAST_LIFT:
        raise InfeasibleError(
            f"{write(load, 'Ω')} on {write(capacitance, 'F')} reaches {write(corner / gain, 'Hz')} by itself",
            ['target.front_end = "low_impedance"', "a larger require.bandwidth"],
        )
    lower = request.fixed.get("R5", SHUNT)
    derivation.note("R5", f"{write(SHUNT, 'Ω')}, common practice: little noise, little load")
    upper = request.fixed.get("R4") or derivation.compute(
        "R4", second_stage.upper_feedback_resistance, reason=f"lift of {gain:.3g}", gain=gain, lower=lower
    )
    shaping = request.fixed.get("C5") or derivation.compute(
        "C5", load_resistor.equaliser_capacitance, reason="zero on the pole of the input",
        load_resistance=load, input_capacitance=capacitance, shunt=lower, gain=gain,
    )  # fmt: skip
    capacitors = request.preferred.capacitors.series
    return [
        Fitted("R1", load, series, high=load, fixed="R1" in request.fixed),
        Fitted("R4", upper, series, low=upper / 1.3, high=upper * 1.3, fixed="R4" in request.fixed),
        Fitted("R5", lower, series, low=lower / 1.5, high=lower * 1.5, fixed="R5" in request.fixed),
        Fitted("C5", shaping, capacitors, low=shaping / 1.5, high=shaping * 1.5, fixed="C5" in request.fixed),
    ]


def _chosen(request: OpAmpReceiverRequest, derivation: Derivation, candidates: dict[str, float]) -> float:
    """The least of the loads that each limit allows, with its reason."""
    if "R1" in request.fixed:
        derivation.note("R1", "fixed in the design file")
        return request.fixed["R1"]
    binding = min(candidates, key=lambda name: candidates[name])
    if not np.isfinite(candidates[binding]):
        raise InfeasibleError(
            "nothing limits R1: no light, no bandwidth and no transimpedance are asked for",
            ["signal.power.max", "require.bandwidth", "require.transimpedance.max"],
        )
    others = ", ".join(f"{name} would allow {write(v, 'Ω')}" for name, v in candidates.items() if name != binding)
    step = derivation.of(f"R1 from {binding}")
    said = f"{binding} binds" + (f": {step.reason}" if step else "") + (f"; {others}" if others else "")
    derivation.note("R1", said)
    return candidates[binding]


def _swing_load(request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench) -> float:
    """R1 whose drop at the one level of most light stays within the headroom, or within the swing asked for."""
    most = brightest(request, bench)
    lows = {name: bench.low(name) for name in ("supply.positive",)}
    highs = {name: bench.high(name) for name in bench.limits if name.startswith("U1.swing") or "common_mode" in name}
    values = {**lows, **highs, "supply.negative": bench.high("supply.negative")}
    values |= {"input_level": request.conditions.input_level, "buffer.gain": 1.0}
    room = float(headroom(values, request)) - bench.high("U1.offset_voltage")
    if room <= 0:
        raise InfeasibleError(
            f"the input has no headroom: {write(room, 'V')} between its level and the nearest limit",
            ["another conditions.input_level", f"conditions.supply wider by {write(-room, 'V')}"],
        )
    current = float(one_level(most, request)) + most["D1.ambient_current"]
    swings = {"headroom": (room, current + most["D1.dark_current"])}
    required = request.require.get("output_swing")
    if required is not None and required.max:
        swings["required"] = (required.max, current)
    swing, drawn = min(swings.values(), key=lambda pair: pair[0] / pair[1] if pair[1] else inf)
    if not drawn:
        return inf
    at = write(most["temperature"], "°C")
    return derivation.compute(
        "R1 from swing", load_resistor.load_for_swing,
        reason=f"{write(swing, 'V')} / {write(drawn, 'A')}: one level + ambient + dark at {at}, tolerance taken off",
        swing=swing / _most(request), current=drawn,
    )  # fmt: skip


def _most(request: OpAmpReceiverRequest) -> float:
    """Largest factor by which a resistor may pass its value: tolerance and temperature. [1]"""
    resistors, temperature = request.preferred.resistors, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    return (1 + resistors.tolerance) * (1 + resistors.temperature_coefficient * farthest)


def _bandwidth_load(
    request: OpAmpReceiverRequest, derivation: Derivation, bench: Bench, others: Values, bandwidth: float
) -> float:
    """Largest R1 that keeps the bandwidth at the slow corner of diode and amplifier, buffer included."""
    capacitance = sum(input_capacitance(request, bench).values())
    start = float(load_resistor.load_for_bandwidth(capacitance=capacitance, bandwidth=bandwidth))
    worst = {name: bench.high(name) for name in ("D1.capacitance", "U1.common_capacitance", "CB")}
    worst |= {name: bench.low(name) for name in ("U1.gain_bandwidth", "supply.positive")}
    worst |= {name: bench.high(name) for name in ("supply.negative", "signal.power", "signal.ambient")}
    loads = start * TRIED
    lanes = {**others, **worst, "R1": loads}
    wanted = wanted_transimpedance(request)
    if amplified(request) and wanted is not None:
        lanes |= {"R5": SHUNT, "R4": SHUNT * np.maximum(wanted / loads - 1, 0.01)}
    found = bench.evaluate(lanes)["bandwidth"]
    reached = np.flatnonzero(found >= bandwidth)
    if not len(reached):
        most = float(np.nanmax(found, initial=0.0))
        raise InfeasibleError(
            f"no load reaches {write(bandwidth, 'Hz')}: at most {write(most, 'Hz')} with this amplifier and diode",
            ["a faster op amp", "a diode of less capacitance", f"require.bandwidth ≤ {write(most, 'Hz')}"],
        )
    largest = float(loads[reached[-1]]) / _most(request)
    return derivation.compute(
        "R1 from bandwidth", load_resistor.load_for_bandwidth,
        reason=f"{write(bandwidth, 'Hz')} kept at most capacitance and slow amplifier",
        capacitance=capacitance * start / largest, bandwidth=bandwidth,
    )  # fmt: skip


FORMULAS = (
    load_resistor.load_for_bandwidth,
    load_resistor.load_for_swing,
    load_resistor.equaliser_gain,
    load_resistor.equaliser_capacitance,
    load_resistor.load_noise,
    second_stage.gain_for_transimpedance,
    second_stage.upper_feedback_resistance,
    transit.corner_frequency,
    transit.combined_bandwidth,
)
