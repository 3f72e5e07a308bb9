"""Exact values of the load and of what is around the amplifier, each with its window."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.detector import stage_bandwidth
from opto_ckt.circuits.receivers.load_resistor import level_buffer
from opto_ckt.circuits.receivers.load_resistor.form import amplified, asked_transimpedance, equalised
from opto_ckt.circuits.receivers.load_resistor.load import (
    SHUNT,
    capacitance_ends,
    check_output,
    chosen,
    from_bandwidth,
    from_swing,
    from_transimpedance,
    input_capacitance,
    least_gain,
    worst_overshoot,
)
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import load_resistor, reference, second_stage, transit
from opto_ckt.limits import Values
from opto_ckt.request import LoadResistorRequest
from opto_ckt.units import write

EQUALISED_TO = 1.6  #: pole of the equaliser over the bandwidth wanted; ours
NEGLIGIBLE = 1e-3  #: overshoot; ours
LEAST_LIFT = 1.2  #: below it an equaliser does nothing; ours


def propose(request: LoadResistorRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    They are sized again where the worst corner overshoots: that takes its share of the swing.

    Raises
    ------
    InfeasibleError : no headroom, no load that reaches the bandwidth, nothing to equalise, an amplifier that rings.
    """
    others = level_values(request, derivation, bench)
    shape = _equaliser if equalised(request) else _buffer
    parts = shape(request, derivation, bench, others, 0.0)
    overshoot = worst_overshoot(request, bench, {**others, **{part.ref: part.exact for part in parts}})
    if overshoot > NEGLIGIBLE:
        parts = shape(request, derivation, bench, others, overshoot)
    return (*parts, *surroundings(request, derivation, others), *level_buffer.bypass(request, derivation))


def _buffer(
    request: LoadResistorRequest, derivation: Derivation, bench: Bench, others: Values, overshoot: float
) -> list[Fitted]:
    """R1 from the bandwidth at its worst corner or from the swing; gain where more is asked for than it gives."""
    series = request.preferred.resistors.series
    candidates = {"swing": from_swing(request, derivation, bench, overshoot)}
    bandwidth = stage_bandwidth(request)
    if bandwidth is not None:
        candidates["bandwidth"] = from_bandwidth(request, derivation, bench, others, bandwidth)
    load = chosen(request, derivation, candidates | from_transimpedance(request))
    resistor = Fitted("R1", load, series, high=load, fixed="R1" in request.fixed)
    wanted = asked_transimpedance(request)
    if not amplified(request) or wanted is None:
        _stable(request, 1.0, f"require.transimpedance.min ≥ {write(least_gain(request) * load, 'V/A')}")
        return [resistor]
    check_output(request, bench, wanted)
    gain = derivation.compute(
        "gain of U1", second_stage.gain_for_transimpedance,
        reason=f"{write(wanted, 'V/A')} wanted of {write(load, 'Ω')}", transimpedance=wanted, first=load,
    )  # fmt: skip
    _stable(request, gain, f"R1 ≤ {write(wanted / least_gain(request), 'Ω')}")
    return [resistor, *_divider(request, derivation, gain, "gain")]


def _equaliser(
    request: LoadResistorRequest, derivation: Derivation, bench: Bench, others: Values, overshoot: float
) -> list[Fitted]:
    """R1 from swing or from the lift that the amplifier has left; zero between the poles that the input may have."""
    bandwidth, capacitance = stage_bandwidth(request), sum(input_capacitance(request, bench).values())
    candidates = {"swing": from_swing(request, derivation, bench, overshoot)}
    if bandwidth is not None:
        slow = bench.low("U1.gain_bandwidth")
        lift = slow / (EQUALISED_TO * bandwidth)
        if lift < LEAST_LIFT:
            needed = 1.01 * LEAST_LIFT * EQUALISED_TO * bandwidth * bench.nominal("U1.gain_bandwidth") / slow
            raise InfeasibleError(
                f"U1 has {lift:.3g} of gain left at {write(EQUALISED_TO * bandwidth, 'Hz')}: nothing to lift with",
                [f"gain bandwidth of U1 ≥ {write(needed, 'Hz')}", 'target.front_end = "low_impedance"'],
            )
        candidates["gain bandwidth"] = derivation.compute(
            "R1 from gain bandwidth", load_resistor.load_for_bandwidth,
            reason=f"U1 has {lift:.3g} of gain left at {write(EQUALISED_TO * bandwidth, 'Hz')}",
            capacitance=capacitance, bandwidth=EQUALISED_TO * bandwidth / lift,
        )  # fmt: skip
    load = chosen(request, derivation, candidates | from_transimpedance(request))
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
    _stable(request, gain, f"R1 ≥ {write(load * request.amplifier.minimum_stable_gain.high / gain, 'Ω')}")
    lower = request.fixed.get("R5", SHUNT)
    ends = capacitance_ends(request, bench, load)
    shaping = request.fixed.get("C5") or derivation.compute(
        "C5", load_resistor.equaliser_capacitance,
        reason=f"zero midway between the poles of {write(ends[0], 'F')} and {write(ends[1], 'F')} across R1",
        load_resistance=load, input_capacitance=(ends[0] * ends[1]) ** 0.5, shunt=lower, gain=gain,
    )  # fmt: skip
    capacitors, resistors = request.preferred.capacitors.series, request.preferred.resistors.series
    return [
        Fitted("R1", load, resistors, high=load, fixed="R1" in request.fixed),
        *_divider(request, derivation, gain, "lift"),
        Fitted("C5", shaping, capacitors, low=shaping / 1.5, high=shaping * 1.5, fixed="C5" in request.fixed),
    ]


def _divider(request: LoadResistorRequest, derivation: Derivation, gain: float, what: str) -> list[Fitted]:
    """R4 and R5 for a gain, the engineer's own where fixed."""
    series, lower = request.preferred.resistors.series, request.fixed.get("R5", SHUNT)
    derivation.note("R5", f"{write(SHUNT, 'Ω')}, common practice: little noise, little load")
    upper = request.fixed.get("R4") or derivation.compute(
        "R4", second_stage.upper_feedback_resistance, reason=f"{what} of {gain:.3g}", gain=gain, lower=lower
    )
    return [
        Fitted("R4", upper, series, low=upper / 1.3, high=upper * 1.3, fixed="R4" in request.fixed),
        Fitted("R5", lower, series, low=lower / 1.5, high=lower * 1.5, fixed="R5" in request.fixed),
    ]


def _stable(request: LoadResistorRequest, gain: float, way: str) -> None:
    """Refuse an op amp that is not stable at the gain it has at high frequencies.

    Raises
    ------
    InfeasibleError : it is not.
    """
    least = request.amplifier.minimum_stable_gain.high
    if gain >= least:
        return
    raise InfeasibleError(
        f"U1 is stable from a gain of {least:.3g}; here it has {gain:.3g}",
        [f"minimum stable gain of U1 ≤ {gain:.3g}", way],
    )


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
    reference.upper_resistance,
    reference.filter_capacitance,
)
