"""R1 around an inverting amplifier: the largest that swing, bandwidth and a bound on the gain allow."""

from __future__ import annotations

from collections.abc import Callable
from math import inf

import numpy as np

from opto_ckt.circuits.receivers.detector import (
    POLARITY,
    brightest,
    noise_frequency,
    on_the_bench,
    one_level,
    stage_bandwidth,
    wanted_transimpedance,
)
from opto_ckt.circuits.receivers.feedback.stage import Stage, part_tolerance
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import noise, noise_generator, second_order, transimpedance, transimpedance_limits
from opto_ckt.formulas.formula import Real
from opto_ckt.formulas.second_stage import second_stage_bandwidth
from opto_ckt.formulas.transit import combined_bandwidth
from opto_ckt.limits import Lanes
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import percent, write


def feedback_resistance(stage: Stage, overshoot: float) -> float:
    """The largest resistance that swing, bandwidth and a bound on the transimpedance allow; the larger, the quieter."""
    request, derivation = stage.request, stage.derivation
    candidates = {"swing": _swing_resistance(stage, overshoot)}
    bound = request.require.get("transimpedance")
    if bound is not None and bound.max:
        candidates["transimpedance"] = bound.max / _most(request)
    bandwidth = stage_bandwidth(request)
    if bandwidth is not None:
        candidates["bandwidth"] = _bandwidth_resistance(stage, bandwidth, _second_stage(stage))
    quiet = _quiet_resistance(stage)
    if quiet is not None and not np.isfinite(min(candidates.values())):
        candidates["noise"] = quiet
    binding = min(candidates, key=lambda name: candidates[name])
    chosen = candidates[binding]
    if not np.isfinite(chosen):
        raise InfeasibleError(
            "nothing limits R1: no light, no bandwidth and no transimpedance are asked for",
            ["signal.power.max", "require.bandwidth", "require.transimpedance.max"],
        )
    others = ", ".join(f"{name} would allow {write(v, 'Ω')}" for name, v in candidates.items() if name != binding)
    if quiet is not None and quiet > chosen:
        others += f", noise asks for {write(quiet, 'Ω')} at least"
    step = derivation.of(f"R1 from {binding}")
    derivation.note("R1", f"{binding} binds" + (f": {step.reason}" if step else "") + (f"; {others}" if others else ""))
    return chosen


def _quiet_resistance(stage: Stage) -> float | None:
    """Least R1 whose thermal noise leaves room for the other generators under a bound on the noise; None if unasked."""
    request, derivation, bench = stage.request, stage.derivation, stage.bench
    bounds = []
    hottest = bench.high("temperature")
    hot = on_the_bench(request, bench, hottest)
    if (bound := request.require.get("input_noise_density")) is not None and bound.max:
        bounds.append(bound.max)
    if (bound := request.require.get("nep_density")) is not None and bound.max:
        bounds.append(bound.max * hot["D1.responsivity"])
    if not bounds:
        return None
    others = (
        float(noise.shot_noise(current=hot["D1.dark_shot"] + hot["D1.ambient_shot"])) ** 2
        + bench.high("U1.current_noise") ** 2
        + stage.other_noise**2
        + float(
            noise.capacitance_current_noise(
                voltage_noise=bench.high("U1.voltage_noise"),
                capacitance=stage.input_capacitance,
                frequency=noise_frequency(request),
            )
        )
        ** 2
    )
    left = min(bounds) ** 2 - others
    if left <= 0:
        return inf
    return derivation.compute(
        "R1 from noise",
        noise_generator.resistance_for_current_noise,
        reason=f"{write(min(bounds), 'A/√Hz')} less shot, amplifier current and e_n C noise, {write(hottest, '°C')}",
        current_noise=left**0.5,
        temperature=hottest,
    )


def _swing_resistance(stage: Stage, overshoot: float) -> float:
    """R1 that puts the one level of most light, at its worst corner, just inside the swing."""
    request, bench = stage.request, stage.bench
    most = brightest(request, bench)
    light, steady, dark = float(one_level(most, request)), most["D1.ambient_current"], most["D1.dark_current"]
    spread = (1 + overshoot) * _most(request)
    rail = _headroom(stage) - bench.high("U1.offset_voltage")
    if rail <= 0:
        raise InfeasibleError(
            f"the output has no headroom: {write(rail, 'V')} between its resting level and its limit",
            [
                f"conditions.input_level {_way_out(stage)}",
                f"conditions.supply wider by {write(-rail, 'V')}",
            ],
        )
    whole = spread * (light + steady) + dark + stage.standing
    rail = min(rail, _driven(stage, whole))
    swings = {"rail": (rail, whole)}
    required = request.require.get("output_swing")
    if required is not None and required.max:
        swings["required"] = (required.max, spread * (light + steady))
    swing, current = min(swings.values(), key=lambda pair: pair[0] / pair[1] if pair[1] else inf)
    if not current:
        return inf
    at = write(most["temperature"], "°C")
    reason = f"{write(swing, 'V')} / {write(current, 'A')}: one level + ambient + dark at {at},"
    reason += f" {percent(spread - 1)} for overshoot and tolerance"
    return stage.derivation.compute(
        "R1 from swing", transimpedance.feedback_resistance, reason=reason, swing=swing, current=current
    )


def _driven(stage: Stage, current: float) -> float:
    """Swing that the op amp can put across a load beside the current that it feeds through R1. [V]

    Raises
    ------
    InfeasibleError : that current alone is more than it gives.
    """
    request, bench = stage.request, stage.bench
    drive = bench.low("U1.output_current_max")
    load = inf if request.load.resistance is None or "gain_stage" in request.blocks_asked else request.load.resistance
    level = request.conditions.input_level
    drive -= (abs(level) if stage.both_ways else POLARITY[request.detector.output] * level) / load
    if current < drive:
        return (drive - current) * load
    raise InfeasibleError(
        f"the light takes {write(current, 'A')} through R1, whatever its value; U1 gives {write(max(drive, 0.0), 'A')}",
        [
            f"signal.power.max ≤ {write(request.signal.power.high * max(drive, 0.0) / current, 'W')}",
            f"output_current_max of U1 ≥ {write(bench.nominal('U1.output_current_max') * current / drive, 'A')}"
            if drive > 0
            else "a lighter load",
        ],
    )


def _most(request: ReceiverRequest) -> float:
    """Largest factor by which a resistor may pass its value: tolerance and temperature. [1]"""
    resistors, temperature = request.preferred.resistors, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    return (1 + resistors.tolerance) * (1 + resistors.temperature_coefficient * farthest)


def _headroom(stage: Stage) -> float:
    bench, level, polarity = stage.bench, stage.request.conditions.input_level, POLARITY[stage.request.detector.output]
    lowest = level * (1 - stage.request.conditions.supply.tolerance) if level > 0 else level  # a divider's, of a supply
    rooms = {
        1: bench.low("supply.positive") - bench.high("U1.swing_to_positive") - level,
        -1: lowest - bench.high("supply.negative") - bench.high("U1.swing_to_negative"),
    }
    return min(rooms.values()) if stage.both_ways else rooms[int(polarity)]


def _way_out(stage: Stage) -> str:
    if stage.both_ways:
        return "in the middle of the supply"
    return "lower" if POLARITY[stage.request.detector.output] > 0 else "higher"


def _second_stage(stage: Stage) -> Callable[[Lanes], Lanes]:
    """Bandwidth of the gain stage behind an R1, at its slow corner; without one there is no bound. [Hz]"""
    asked = stage.request.blocks.gain_stage
    if asked is None:
        return lambda resistance: np.full_like(resistance, inf)
    record = stage.request.second_amplifier or stage.request.amplifier
    slowest, gain = record.limits(stage.request.assumed)["gain_bandwidth"].low, asked.gain
    wanted = wanted_transimpedance(stage.request)

    def bandwidth(resistance: Lanes) -> Lanes:
        both = np.maximum(wanted or 0.0, resistance) if gain is None else gain * resistance
        found = second_stage_bandwidth(gain_bandwidth=slowest, transimpedance=both, first=resistance)
        return np.asarray(found)

    return bandwidth


def _bandwidth_resistance(stage: Stage, bandwidth: float, second: Callable[[Lanes], Lanes]) -> float:
    """Largest R1 that keeps the bandwidth at every corner of op amp and capacitance, with C_f sized at nominal."""
    bench, quality, nominal = stage.bench, stage.quality, stage.input_capacitance
    scale = bench.high("D1.capacitance") / bench.nominal("D1.capacitance")
    gain_bandwidth = bench.nominal("U1.gain_bandwidth")
    start = transimpedance_limits.largest_feedback_resistance(
        input_capacitance=nominal, gain_bandwidth=gain_bandwidth, bandwidth=bandwidth, quality=quality
    )
    resistances = start * np.geomspace(1e-2, 2, 400)
    with np.errstate(invalid="ignore"):
        fitted = transimpedance.feedback_capacitance(
            feedback_resistance=resistances, input_capacitance=nominal, gain_bandwidth=gain_bandwidth, quality=quality
        )
    fitted = np.nan_to_num(np.maximum(fitted, bench.nominal("CS")), nan=bench.nominal("CS"))
    deviation = part_tolerance(stage, fitted - bench.nominal("CS")) + bench.high("CS") - bench.nominal("CS")
    kept = np.full(len(resistances), inf)
    for speed in (bench.low("U1.gain_bandwidth"), bench.high("U1.gain_bandwidth")):
        for load in (nominal / scale, nominal * scale):
            for capacitance in (np.maximum(fitted - deviation, 0.0), fitted + deviation):
                parts: dict[str, Real] = {
                    "feedback_resistance": resistances,
                    "input_capacitance": load,
                    "feedback_capacitance": capacitance,
                    "gain_bandwidth": speed,
                }
                natural = transimpedance.natural_frequency(**parts)
                q = transimpedance.quality_factor(**parts)
                kept = np.minimum(kept, second_order.bandwidth(natural_frequency=natural, quality=q))
    kept = np.asarray(combined_bandwidth(first=kept, second=second(resistances)))
    reaching = np.flatnonzero(kept >= bandwidth)
    widest = int(np.argmax(kept))
    missed = float(resistances[widest]) if widest else float(start) / 10
    largest = float(resistances[reaching[-1]]) if len(reaching) else missed
    # the closed form at the capacitance that gives the same R1 shows where the figure comes from
    worst = start / largest * nominal
    return stage.derivation.compute(
        "R1 from bandwidth",
        transimpedance_limits.largest_feedback_resistance,
        reason=f"{write(bandwidth, 'Hz')} kept at slow and fast op amp, least and most capacitance",
        input_capacitance=float(worst),
        gain_bandwidth=gain_bandwidth,
        bandwidth=bandwidth,
        quality=quality,
    )
