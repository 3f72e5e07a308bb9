"""Exact values of the transimpedance amplifier's parts, each with its window."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.tia.capacitor import feedback_capacitor
from opto_ckt.circuits.receivers.tia.resistor import feedback_resistance
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import front_end, loop, reference, second_order, transimpedance, transimpedance_limits
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

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
        r1 = _fixed(request, derivation, "R1") or feedback_resistance(request, derivation, bench, quality, overshoot)
        c1, overshoot = feedback_capacitor(request, derivation, bench, r1, quality, others)
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
