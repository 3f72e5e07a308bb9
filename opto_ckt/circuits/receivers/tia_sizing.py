"""Exact values of the transimpedance amplifier: R1 from what binds, C1 in its window, the level of a single supply."""

from __future__ import annotations

from collections.abc import Mapping
from math import inf

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers import tia_window
from opto_ckt.circuits.receivers.detector import (
    POLARITY,
    level_factor,
    noise_band,
    noise_frequency,
    wanted_bandwidth,
)
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import (
    front_end,
    loop,
    noise,
    noise_generator,
    reference,
    second_order,
    transimpedance,
    transimpedance_limits,
)
from opto_ckt.formulas.formula import Real
from opto_ckt.limits import Limits, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import percent, write

QUALITY: Mapping[str, float] = {"flat": 0.5**0.5, "bessel": 3**-0.5, "critical": 0.5}
"""Q of a second-order response by its name."""

LEVEL_CURRENT = 100e-6  #: through the level's divider, common practice: far above the input bias current [A]
LEVEL_CORNER = 10.0  #: of the level's filter, common practice: below the band of nearly all signals [Hz]
BYPASS = 100e-9  #: common practice, at each supply pin [F]


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    R1 and C1 are sized twice: the overshoot that C1 leaves at its worst corner takes its share of the swing.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    resistors, bypass = request.preferred.resistors.series, request.preferred.bypass.series
    others = _level(request, derivation, bench)
    quality = wanted_quality(request)
    overshoot = float(second_order.overshoot(quality=quality)) if quality > 0.5 else 0.0
    for _ in range(2):
        r1 = _fixed(request, derivation, "R1") or _feedback_resistance(request, derivation, bench, quality, overshoot)
        c1, overshoot = tia_window.feedback_capacitor(request, derivation, bench, r1, quality, others)
    parts = [Fitted("R1", r1, resistors, high=r1, fixed="R1" in request.fixed), c1]
    for ref, value in others.items():
        series, low = (bypass, value) if ref == "C2" else (resistors, 0.0)
        parts.append(Fitted(ref, value, series, low=low, fixed=ref in request.fixed))
    for ref in ("C8", "C9") if request.conditions.supply.negative else ("C8",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        parts.append(Fitted(ref, value, bypass, low=value, high=value, fixed=ref in request.fixed))
    return tuple(parts)


def wanted_quality(request: ReceiverRequest) -> float:
    """Q that the response asked for has; maximally flat where neither a name nor a bound says otherwise."""
    if request.target.response is not None:
        return QUALITY[request.target.response]
    peaking = request.require.get("peaking")
    if peaking is not None and peaking.max:
        return float(second_order.quality_for_peaking(peaking=peaking.max / 2))
    return QUALITY["flat"]


def _fixed(request: ReceiverRequest, derivation: Derivation, ref: str) -> float | None:
    value = request.fixed.get(ref)
    if value is not None:
        derivation.note(ref, "fixed in the design file")
    return value


def _feedback_resistance(
    request: ReceiverRequest, derivation: Derivation, bench: Bench, quality: float, overshoot: float
) -> float:
    """The largest R1 that swing, bandwidth and a bound on the transimpedance allow; the larger, the quieter."""
    candidates = {"swing": _swing_resistance(request, derivation, bench, overshoot)}
    bandwidth = wanted_bandwidth(request)
    if bandwidth is not None:
        candidates["bandwidth"] = _bandwidth_resistance(request, derivation, bench, quality, bandwidth)
    bound = request.require.get("transimpedance")
    if bound is not None and bound.max:
        candidates["transimpedance"] = bound.max / _most(request)
    quiet = _quiet_resistance(request, derivation, bench)
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


def _quiet_resistance(request: ReceiverRequest, derivation: Derivation, bench: Bench) -> float | None:
    """Least R1 whose thermal noise leaves room for the other generators under a bound on the noise; None if unasked."""
    bounds = []
    hottest = bench.high("temperature")
    if (bound := request.require.get("input_noise_density")) is not None and bound.max:
        bounds.append(bound.max)
    if (bound := request.require.get("nep_density")) is not None and bound.max:
        bounds.append(bound.max * float(request.detector.responsivity_at(request.signal.wavelength)))
    if not bounds:
        return None
    dark = float(request.detector.dark_current_at(hottest, bench.high("D1.dark_current")))
    steady = dark + bench.high("signal.ambient")
    others = (
        float(noise.shot_noise(current=steady)) ** 2
        + bench.high("U1.current_noise") ** 2
        + float(
            noise.capacitance_current_noise(
                voltage_noise=bench.high("U1.voltage_noise"),
                capacitance=sum(tia_window.input_capacitance(request, bench).values()),
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


def _swing_resistance(request: ReceiverRequest, derivation: Derivation, bench: Bench, overshoot: float) -> float:
    """R1 that puts the one level of most light, at the hottest corner, just inside the swing."""
    detector, hottest = request.detector, bench.high("temperature")
    light = float(detector.responsivity_at(request.signal.wavelength)) * request.signal.power.high
    light *= level_factor(request) * (bench.high("D1.responsivity") / bench.nominal("D1.responsivity"))
    steady = bench.high("signal.ambient")
    dark = float(detector.dark_current_at(hottest, bench.high("D1.dark_current")))
    spread = (1 + overshoot) * _most(request)
    rail = _headroom(request, bench) - bench.high("U1.offset_voltage")
    if rail <= 0:
        raise InfeasibleError(
            f"the output has no headroom: {write(rail, 'V')} between its resting level and its limit",
            [
                f"conditions.input_level {'lower' if POLARITY[detector.output] > 0 else 'higher'}",
                f"conditions.supply wider by {write(-rail, 'V')}",
            ],
        )
    swings = {"rail": (rail, spread * (light + steady) + dark)}
    required = request.require.get("output_swing")
    if required is not None and required.max:
        swings["required"] = (required.max, spread * (light + steady))
    swing, current = min(swings.values(), key=lambda pair: pair[0] / pair[1] if pair[1] else inf)
    if not current:
        return inf
    reason = f"{write(swing, 'V')} / {write(current, 'A')}: one level + ambient + dark at {write(hottest, '°C')},"
    reason += f" {percent(spread - 1)} for overshoot and tolerance"
    return derivation.compute(
        "R1 from swing", transimpedance.feedback_resistance, reason=reason, swing=swing, current=current
    )


def _most(request: ReceiverRequest) -> float:
    """Largest factor by which a resistor may pass its value: tolerance and temperature. [1]"""
    resistors, temperature = request.preferred.resistors, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    return (1 + resistors.tolerance) * (1 + resistors.temperature_coefficient * farthest)


def _headroom(request: ReceiverRequest, bench: Bench) -> float:
    level = request.conditions.input_level
    if POLARITY[request.detector.output] > 0:
        return bench.low("supply.positive") - bench.high("U1.swing_to_positive") - level
    return level - bench.high("supply.negative") - bench.high("U1.swing_to_negative")


def _bandwidth_resistance(
    request: ReceiverRequest, derivation: Derivation, bench: Bench, quality: float, bandwidth: float
) -> float:
    """Largest R1 that keeps the bandwidth at every corner of op amp and capacitance, with C_f sized at nominal."""
    nominal = sum(tia_window.input_capacitance(request, bench).values())
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
    kept = np.full(len(resistances), inf)
    for speed in (bench.low("U1.gain_bandwidth"), bench.high("U1.gain_bandwidth")):
        for load in (nominal / scale, nominal * scale):
            for capacitance in (0.9 * fitted, 1.1 * fitted):
                parts: dict[str, Real] = {
                    "feedback_resistance": resistances,
                    "input_capacitance": load,
                    "feedback_capacitance": capacitance,
                    "gain_bandwidth": speed,
                }
                natural = transimpedance.natural_frequency(**parts)
                q = transimpedance.quality_factor(**parts)
                kept = np.minimum(kept, second_order.bandwidth(natural_frequency=natural, quality=q))
    reaching = np.flatnonzero(kept >= bandwidth)
    largest = float(resistances[reaching[-1]]) if len(reaching) else float(start) / 10
    # the closed form at the capacitance that gives the same R1 shows where the figure comes from
    worst = start / largest * nominal
    return derivation.compute(
        "R1 from bandwidth",
        transimpedance_limits.largest_feedback_resistance,
        reason=f"{write(bandwidth, 'Hz')} kept at slow and fast op amp, least and most capacitance",
        input_capacitance=float(worst),
        gain_bandwidth=gain_bandwidth,
        bandwidth=bandwidth,
        quality=quality,
    )


def _level(request: ReceiverRequest, derivation: Derivation, bench: Bench) -> dict[str, float]:
    """Divider and filter that make the level of a single supply; nothing where the + input sits at ground."""
    level, supply = request.conditions.input_level, bench.nominal("supply.positive")
    if level <= 0:
        return {}
    lower = request.fixed.get("R3", level / LEVEL_CURRENT)
    derivation.note("R3", f"{write(level, 'V')} at {write(LEVEL_CURRENT, 'A')}, common practice")
    upper = derivation.compute(
        "R2", reference.upper_resistance, reason=f"{write(level, 'V')} from {write(supply, 'V')}",
        voltage=supply, tap_voltage=level, lower=lower,
    )  # fmt: skip
    parallel = float(reference.parallel_resistance(first=upper, second=lower))
    filtered = derivation.compute(
        "C2", reference.filter_capacitance, reason=f"corner at {write(LEVEL_CORNER, 'Hz')}: noise, ripple",
        resistance=parallel, corner=LEVEL_CORNER,
    )  # fmt: skip
    values = {"R2": upper, "R3": lower, "C2": filtered}
    return values | {ref: request.fixed[ref] for ref in values if ref in request.fixed}


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """Advice on slew rate, thick film, dark reach, polarity and capacitors too small to fit."""
    responsivity = float(np.max(values["D1.responsivity"]))
    r1 = float(np.max(values["R1"]))
    found = [
        "output rises with light" if POLARITY[request.detector.output] > 0 else "output falls with light",
    ]
    step = responsivity * request.signal.power.high * level_factor(request) * r1
    bandwidth = wanted_bandwidth(request)
    if bandwidth is not None:
        needed = 2 * np.pi * bandwidth * step / 2
        if needed > request.amplifier.slew_rate.low:
            found.append(
                f"slew rate: the largest step asks for {write(float(needed), 'V/s')}, U1 gives"
                f" {write(request.amplifier.slew_rate.low, 'V/s')}"
            )
    standing = (responsivity * request.signal.power.nominal + request.ambient_current.high) * r1
    if standing > 0.05 and noise_band(request)[0] < 1e3:
        found.append(f"R1 carries {write(standing, 'V')} of standing photocurrent: fit thin film, thick film adds 1/f noise")
    dark = float(np.min(values["input_level"])) - float(np.min(values["supply.negative"]))
    if dark < request.amplifier.swing_to_negative.high:
        found.append("the output cannot reach its dark level: raise conditions.input_level or add a negative supply")
    if 0 < float(np.max(values["C1"])) < tia_window.BUILDABLE:
        found.append("C1 is no more than its pads: leave the pads bare, trim on the board, or lower R1")
    return tuple(found)


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
