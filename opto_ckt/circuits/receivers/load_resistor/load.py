"""How large R1 may be: what the range of light, the bandwidth and the amplifier's gain leave."""

from __future__ import annotations

from math import inf

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.receivers.detector import POLARITY, brightest, one_level
from opto_ckt.circuits.receivers.feed import bias_limit, bias_node
from opto_ckt.circuits.receivers.load_resistor.form import amplified, asked_transimpedance
from opto_ckt.circuits.receivers.load_resistor.operation import rooms
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import load_resistor
from opto_ckt.limits import Values
from opto_ckt.request import LoadResistorRequest
from opto_ckt.units import percent, write

TRIED = np.geomspace(1e-3, 3, 240)  #: loads tried, as multiples of that of one pole
SHUNT = 249.0  #: R5: little noise, little load; common practice [Ω]
LEAST_GAIN = 1.25  #: of an amplifier that is to have some; ours
BENCH_SPREAD = ("U1.swing", "U1.common_mode")  #: limits whose upper end leaves the least room


def input_capacitance(request: LoadResistorRequest, bench: Bench) -> dict[str, float]:
    """Capacitance across R1 by where it comes from, nominal; the loop keeps the differential one off it. [F]"""
    capacitance = bench.nominal("D1.capacitance")
    return {
        "D1 at its bias": float(request.detector.capacitance_at(request.detector.resting_bias, capacitance)),
        "U1 common mode": bench.nominal("U1.common_capacitance"),
        "board": bench.nominal("CB"),
    }


def capacitance_ends(request: LoadResistorRequest, bench: Bench, load: float) -> tuple[float, float]:
    """Least capacitance across R1, and most: that of a diode whose bias the brightest light across R1 takes. [F]"""
    brightness, detector = brightest(request, bench), request.detector
    current = brightness["D1.responsivity"] * brightness["signal.power"] + brightness["D1.ambient_current"]
    left = max(detector.resting_bias - load * current, 0.0)
    around = ("U1.common_capacitance", "CB")
    least = detector.capacitance_at(detector.resting_bias, bench.low("D1.capacitance"))
    greatest = detector.capacitance_at(left, bench.high("D1.capacitance"))
    return float(least) + sum(map(bench.low, around)), float(greatest) + sum(map(bench.high, around))


def most(request: LoadResistorRequest) -> float:
    """Largest factor by which a resistor may pass its value: tolerance and temperature. [1]"""
    resistors, temperature = request.preferred.resistors, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    return (1 + resistors.tolerance) * (1 + resistors.temperature_coefficient * farthest)


def least_gain(request: LoadResistorRequest) -> float:
    """Gain that U1 has at least where it has some: stable there too. [V/V]"""
    return max(LEAST_GAIN, request.amplifier.minimum_stable_gain.high)


def chosen(request: LoadResistorRequest, derivation: Derivation, candidates: dict[str, float]) -> float:
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


def from_transimpedance(request: LoadResistorRequest) -> dict[str, float]:
    """Load that a bound on the transimpedance allows; what a gain has to be left for, of an amplifier with some. [Ω]"""
    bound, wanted = request.require.get("transimpedance"), asked_transimpedance(request)
    if amplified(request) and wanted is not None:
        return {"gain of U1": wanted / least_gain(request)}
    return {"transimpedance": bound.max / most(request)} if bound is not None and bound.max else {}


def from_swing(request: LoadResistorRequest, derivation: Derivation, bench: Bench, overshoot: float = 0.0) -> float:
    """R1 whose drop at the one level of most light stays within the room, or within the swing asked for. [Ω]

    What a step passes its final value by takes its share.
    """
    brightness = brightest(request, bench)
    limit, room = min(_rooms(request, bench).items(), key=lambda pair: pair[1])
    if room <= 0:
        raise InfeasibleError(
            f"the input has no headroom: {write(room, 'V')} between its level and the {limit}",
            ["another conditions.input_level", f"conditions.supply wider by {write(-room, 'V')}"],
        )
    current = (1 + overshoot) * float(one_level(brightness, request) + brightness["D1.ambient_current"])
    swings = {limit: (room, current + brightness["D1.dark_current"])}
    required = request.require.get("output_swing")
    if required is not None and required.max:
        swings["output_swing"] = (required.max, current)
    limit = min(swings, key=lambda name: swings[name][0] / swings[name][1] if swings[name][1] else inf)
    swing, drawn = swings[limit]
    if not drawn:
        return inf
    at = write(brightness["temperature"], "°C")
    said = f"{write(swing, 'V')} of {limit} / {write(drawn, 'A')}: one level + ambient"
    said += f"{' + dark' if limit != 'output_swing' else ''} at {at}, tolerance taken off"
    said += f", {percent(overshoot)} for overshoot" if overshoot else ""
    return derivation.compute(
        "R1 from swing", load_resistor.load_for_swing, reason=said,
        swing=swing / most(request), current=drawn,
    )  # fmt: skip


def worst_overshoot(request: LoadResistorRequest, bench: Bench, exact: Values) -> float:
    """Of a step where the equaliser lifts too early or the buffer rings: little capacitance, either speed of U1. [1]

    Parameters
    ----------
    exact : values of all fitted parts.
    """
    spread, stock = most(request), request.preferred.capacitors
    early = {"R1": 1 / spread, "R4": spread, "R5": spread, "C5": 1 + stock.tolerance}
    values = {name: np.full(2, value * early.get(name, 1.0)) for name, value in exact.items()}
    least = ("D1.capacitance", "U1.common_capacitance", "CB", "signal.power", "signal.ambient")
    values |= {name: np.full(2, bench.low(name)) for name in least}
    speeds = np.array([bench.low("U1.gain_bandwidth"), bench.high("U1.gain_bandwidth")])
    found = bench.evaluate({**values, "U1.gain_bandwidth": speeds})["overshoot"]
    return min(float(np.nan_to_num(found, nan=1.0).max()), 1.0)


def check_output(request: LoadResistorRequest, bench: Bench, wanted: float) -> None:
    """Refuse a transimpedance that drives the output to its limit at the most light.

    Raises
    ------
    InfeasibleError : it does.
    """
    brightness, room = brightest(request, bench), _rooms(request, bench)["output of U1"]
    current = float(one_level(brightness, request)) + brightness["D1.ambient_current"] + brightness["D1.dark_current"]
    if wanted * current <= room:
        return
    raise InfeasibleError(
        f"{write(wanted, 'V/A')} at the most light takes {write(wanted * current, 'V')}, the output of U1 has"
        f" {write(max(room, 0.0), 'V')}",
        [
            f"require.transimpedance.min ≤ {write(max(room, 0.0) / current, 'V/A')}",
            f"signal.power.max ≤ {write(request.signal.power.high * max(room, 0.0) / (wanted * current), 'W')}",
            f"conditions.supply wider by {write(wanted * current - room, 'V')}",
        ],
    )


def _rooms(request: LoadResistorRequest, bench: Bench) -> dict[str, float]:
    """Room of the node by what ends it, without gain, at the worst end of the supply; offsets taken off. [V]"""
    highs = {name: bench.high(name) for name in bench.limits if name.startswith(BENCH_SPREAD)}
    offsets = sum(bench.high(name) for name in bench.limits if name.endswith(".offset_voltage"))
    sign, own, nominal = POLARITY[request.detector.output], bias_limit(request), bench.nominal("supply.positive")
    found: dict[str, float] = {}
    for positive in (bench.low("supply.positive"), bench.high("supply.positive")):
        level = request.conditions.input_level * positive / nominal
        negative = bench.high("supply.negative")
        ends = {"positive": positive, "negative": negative, "level": level, "0": 0.0}
        far = ends.get(bias_node(request), own.high if sign > 0 else own.low)
        rails = {"supply.positive": positive, "supply.negative": negative, "supply.bias": far}
        for name, room in rooms({**highs, **rails, "input_level": level, "buffer.gain": 1.0}, request).items():
            found[name] = min(found.get(name, inf), float(room) - offsets)
    return found


def from_bandwidth(
    request: LoadResistorRequest, derivation: Derivation, bench: Bench, others: Values, bandwidth: float
) -> float:
    """Largest R1 that keeps the bandwidth at the slow corner of diode and amplifier, buffer included. [Ω]"""
    capacitance = sum(input_capacitance(request, bench).values())
    start = float(load_resistor.load_for_bandwidth(capacitance=capacitance, bandwidth=bandwidth))
    worst = {name: bench.high(name) for name in ("D1.capacitance", "U1.common_capacitance", "CB")}
    worst |= {name: bench.low(name) for name in ("U1.gain_bandwidth", "supply.positive")}
    worst |= {name: bench.high(name) for name in ("supply.negative", "signal.power", "signal.ambient")}
    loads = start * TRIED
    lanes = {**others, **worst, "R1": loads}
    wanted = asked_transimpedance(request)
    if amplified(request) and wanted is not None:
        lanes |= {"R5": SHUNT, "R4": SHUNT * (np.maximum(wanted / loads, least_gain(request)) - 1)}
    found = bench.evaluate(lanes)["bandwidth"]
    reached = np.flatnonzero(found >= bandwidth)
    if not len(reached):
        reach = float(np.nanmax(found, initial=0.0))
        raise InfeasibleError(
            f"no load reaches {write(bandwidth, 'Hz')}: at most {write(reach, 'Hz')} with this amplifier and diode",
            ["a faster op amp", "a diode of less capacitance", f"require.bandwidth ≤ {write(reach, 'Hz')}"],
        )
    largest = float(loads[reached[-1]]) / most(request)
    return derivation.compute(
        "R1 from bandwidth", load_resistor.load_for_bandwidth,
        reason=f"{write(bandwidth, 'Hz')} kept at most capacitance and slow amplifier",
        capacitance=capacitance * start / largest, bandwidth=bandwidth,
    )  # fmt: skip
