"""Exact values of the linear LED driver, each with its window."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.compensation import compensation
from opto_ckt.circuits.drivers.fitting import BYPASS, SENSE_LEAD, Sizing, capacitor_spread, refuse_unsuited
from opto_ckt.circuits.drivers.led import asked_current, heated, nominal
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.circuits.drivers.slack import GATE, LEAST_SERIES
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import coupling, driver, driver_loop, led, reference, transistor
from opto_ckt.limits import Limit
from opto_ckt.request import LedLinearRequest
from opto_ckt.request.reading import Limit as AskedLimit
from opto_ckt.units import write

SENSE = 0.3  #: at the standing current: noise and offset below it, compliance and heat above; common practice [V]
DIVIDER_CURRENT = 100e-6  #: common practice: far above the input bias current [A]
NEAR = 1.013  #: a window that holds one or two values of E96
LOWER = 0.7  #: the coupling's corner lies so far below the band asked for
SPARE = 2.0  #: bandwidth that the compensation leaves over the band: LED and corners take their part
FORMULAS = (
    driver.sense_resistance,
    driver.fail_safe_resistance,
    driver.compliance,
    driver.series_resistance,
    driver.output_current_noise,
    driver_loop.gate_pole,
    driver_loop.crossover_estimate,
    driver_loop.compensation_resistance,
    driver_loop.compensation_capacitance,
    reference.upper_resistance,
    coupling.coupling_capacitance,
    transistor.square_law_transconductance,
    led.saturation_current,
    led.second_harmonic,
    led.optical_bandwidth,
)


def propose(request: LedLinearRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : LED, supply, reference or amplifier leave no values.
    """
    refuse_unsuited(request, bench)
    sizing = Sizing(request, derivation)
    _current(sizing, bench)
    _standing(sizing, bench)
    _common(sizing)
    _coupling(sizing)
    others = {ref: part.exact for ref, part in sizing.parts.items()}
    asked = {name: limit for name, limit in request.require.items() if name in ("phase_margin", "peaking")}
    asked["loop_bandwidth"] = AskedLimit(min=SPARE * request.signal.band.max)
    return (*sizing.parts.values(), compensation(request, derivation, bench, others, asked))


def _current(sizing: Sizing[LedLinearRequest], bench: Bench) -> None:
    """R1 for the sense voltage; R7 as near to fail-safe as the lowest supply leaves it at the crest.

    Raises
    ------
    InfeasibleError : the lowest supply does not carry the crest through LED, transistor and sense resistor.
    """
    request, derivation = sizing.request, sizing.derivation
    standing = asked_current(request)
    crest, spread = standing * (1 + request.signal.modulation_index), resistor_spread(request)
    typical = {name: bench.nominal(name) for name in bench.limits}
    share = float(pass_transistor(request.transistor).share(typical))
    exact = derivation.compute(
        "R1",
        driver.sense_resistance,
        reason=f"{write(SENSE, 'V')} at the standing {write(standing / share, 'A')}; common practice",
        reference=SENSE,
        current=standing / share,
    )
    sizing.fit("R1", exact, "resistors", low=exact / NEAR, high=exact * NEAR)
    most, least_forward = request.source.current_max, _forward(request, request.source.current_max, -1.0)
    safe = derivation.compute(
        "R7",
        driver.fail_safe_resistance,
        reason=f"Q1 and R1 counted as shorted, current_max of the LED {write(most, 'A')}, tolerance on top",
        supply=bench.high("supply.positive"),
        forward_voltage=least_forward,
        current_limit=most,
        on_resistance=0.0,
    ) / (1 - spread)
    weak = ("Q1.transconductance", "Q1.current_gain")
    worst = {name: limit.high for name, limit in bench.limits.items() if isinstance(limit, Limit)}
    worst |= {name: bench.low(name) for name in weak if name in worst}
    peak = crest * (1 + spread) + (bench.high("U2.voltage") / bench.nominal("U2.voltage") - 1) * crest
    sensed = peak * sizing["R1"] / share
    drive = bench.low("supply.positive") - bench.high("U1.swing_to_positive") - sensed
    across = float(pass_transistor(request.transistor).least_across(worst, np.asarray(peak), np.asarray(drive)))
    forward = _forward(request, peak, 1.0)
    required = request.require.get("compliance_margin")
    margin = 0.0 if required is None else required.min or 0.0
    left = bench.low("supply.positive") - forward - sensed - across - margin
    room = left / peak / (1 + spread)
    if room < LEAST_SERIES:
        higher = request.conditions.supply.positive + LEAST_SERIES * peak - left
        raise InfeasibleError(
            f"the lowest supply, {write(bench.low('supply.positive'), 'V')}, does not carry the crest of"
            f" {write(peak, 'A')}: the LED takes {write(forward, 'V')}, R1 {write(sensed, 'V')},"
            f" Q1 {write(across, 'V')}",
            [
                f"conditions.supply.positive ≥ {write(higher, 'V')}",
                "a lower signal.current or signal.modulation_index",
            ],
        )
    safe = max(safe, LEAST_SERIES)
    if room < safe:
        derivation.note(
            "R7",
            f"{write(safe, 'Ω')} would be fail-safe; compliance at the crest leaves {write(room, 'Ω')}: see faults",
        )
    sizing.fit("R7", min(safe, room), "resistors", low=min(safe, 0.93 * room), high=room)


def _forward(request: LedLinearRequest, current: float, position: float) -> float:
    """Extreme of the LED's voltage at a current: over both ends of the temperature, least or greatest sheet. [V]"""
    ends = request.conditions.temperature
    found = [
        float(heated(nominal(request, end, forward=position), request, current)[0]) for end in (ends.low, ends.high)
    ]
    return min(found) if position < 0 else max(found)


def _standing(sizing: Sizing[LedLinearRequest], bench: Bench) -> None:
    """Divider from the reference to the set voltage; R6 keeps the reference fed at the lowest supply.

    Raises
    ------
    InfeasibleError : the reference is below the sense voltage, or above the lowest supply.
    """
    request, derivation = sizing.request, sizing.derivation
    voltage, highest, supply = bench.nominal("U2.voltage"), bench.high("U2.voltage"), bench.low("supply.positive")
    if voltage <= SENSE or supply <= highest:
        raise InfeasibleError(
            f"the reference of {write(voltage, 'V')} has to lie between the sense voltage, {write(SENSE, 'V')}, and the"
            f" lowest supply, {write(supply, 'V')}",
            ["another reference.voltage"],
        )
    lower = SENSE / DIVIDER_CURRENT
    if "R2" in request.fixed:
        lower = request.fixed["R2"] * SENSE / (voltage - SENSE)
    why = f"{write(SENSE, 'V')} at {write(DIVIDER_CURRENT, 'A')}, common practice"
    sizing.fit("R3", lower, "resistors", low=lower / NEAR, high=lower * NEAR, why=why)
    upper = derivation.compute(
        "R2", reference.upper_resistance, reason=f"{write(SENSE, 'V')} from {write(voltage, 'V')}",
        voltage=voltage, tap_voltage=SENSE, lower=sizing["R3"],
    )  # fmt: skip
    sizing.fit("R2", upper, "resistors", low=0.97 * upper, high=1.03 * upper)
    drawn = request.reference.operating_current + DIVIDER_CURRENT
    feed = derivation.compute(
        "R6",
        driver.series_resistance,
        reason=f"({write(supply, 'V')} - {write(highest, 'V')}) / {write(drawn, 'A')}: fed at the lowest supply",
        supply=supply,
        switch_drop=0.0,
        forward_voltage=highest,
        current=drawn,
    ) / (1 + resistor_spread(request))
    sizing.fit("R6", feed, "resistors", low=0.95 * feed, high=feed)


def _common(sizing: Sizing[LedLinearRequest]) -> None:
    """Values by common practice."""
    lead = sizing.known("R4", SENSE_LEAD)
    sizing.fit("R4", SENSE_LEAD, "resistors", SENSE_LEAD, SENSE_LEAD, "common practice: lets C1 take over the loop")
    sizing.fit("R9", lead, "resistors", lead, lead, "like R4: equal drops of the input bias currents")
    sizing.fit("R5", GATE, "resistors", GATE, GATE, "common practice: parts U1 from the capacitance of Q1")
    why = "common practice: 100 nF close to the supply pin"
    sizing.fit("C8", BYPASS, "bypass", BYPASS, BYPASS, why)
    if sizing.request.conditions.supply.negative:
        sizing.fit("C9", BYPASS, "bypass", BYPASS, BYPASS, why)


def _coupling(sizing: Sizing[LedLinearRequest]) -> None:
    """C2: its corner below the band, at its own least; without a beginning of the band, a thousandth of its end."""
    request = sizing.request
    band = request.signal.band
    corner = LOWER * (band.min or 1e-3 * band.max)
    parallel = float(reference.parallel_resistance(first=sizing["R2"], second=sizing["R3"]))
    least = (parallel + request.signal.source_resistance) * (1 - resistor_spread(request))
    exact = sizing.derivation.compute(
        "C2",
        coupling.coupling_capacitance,
        reason=f"corner at {write(corner, 'Hz')} or below, C2 at its least",
        resistance=least,
        cutoff=corner,
    ) / (1 - _least_capacitor(request))
    sizing.fit("C2", exact, "bypass", low=exact, high=10 * exact)


def _least_capacitor(request: LedLinearRequest) -> float:
    """How far a bypass capacitor may lie below its value. [1]"""
    return min(capacitor_spread(request) + 0.1, 0.5)
