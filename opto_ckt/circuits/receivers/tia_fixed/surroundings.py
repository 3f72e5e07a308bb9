"""Bypass, loads, heat, faults and advice around a bought amplifier."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Fault, FaultOutcome, Fitted, Heat, Stress
from opto_ckt.circuits.receivers import avalanche, board
from opto_ckt.circuits.receivers.detector import one_level
from opto_ckt.circuits.receivers.feedback.faults import INPUT_CLAMP_CURRENT, OVERLOAD, supplies
from opto_ckt.circuits.receivers.tia_fixed.structure import passes_dc
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import decision, fixed_tia
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.request import FixedTiaRequest
from opto_ckt.topology import SHORT
from opto_ckt.units import write

FORMULAS = (fixed_tia.density_from_rms, fixed_tia.peak_to_peak_factor, decision.sensitivity, decision.overload_power)


def propose(request: FixedTiaRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """The supply's bypass; all else is the amplifier's own, or a block's."""
    return tuple(board.surroundings(request, derivation, {}))


def _current(values: Values, request: FixedTiaRequest) -> float | Lanes:
    return one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]


def stresses(values: Values, request: FixedTiaRequest) -> tuple[Stress, ...]:
    """Bias and most current of the detector; the supply across the amplifier."""
    return (
        Stress("D1", voltage=request.detector.resting_bias, current=_current(values, request)),
        Stress("U1", voltage=values["supply.positive"] - values["supply.negative"]),
        *board.stresses(values),
    )


def heat(values: Values, request: FixedTiaRequest) -> tuple[Heat, ...]:
    """None: the sheets of such amplifiers state no junction."""
    return ()


def faults(request: FixedTiaRequest) -> tuple[Fault, ...]:
    """The cases of a detector and its bias; each computed by overriding values."""
    return (
        Fault("detector open", {"D1.responsivity": 0.0, "D1.dark_current": 0.0, "signal.ambient": 0.0}),
        Fault("detector short", {"D1.shunt_resistance": SHORT}),
        *supplies(request),
        Fault(f"light {OVERLOAD:.0f} times the most", {"signal.power": OVERLOAD * request.signal.power.high}),
    )


def outcome(fault: Fault, values: Values, request: FixedTiaRequest) -> FaultOutcome:
    """Current into the amplifier's input that the fault leads to, over all lanes."""
    across = np.abs(values["supply.bias"] - request.conditions.input_level)
    series = values["D1.shunt_resistance"] + values.get("R10", 0.0)
    into = _current(values, request) + across / series
    if "R10" in values:
        into = np.minimum(into, across / np.maximum(values["R10"], 1e-3))
    worst = float(np.max(into))
    ok = worst <= INPUT_CLAMP_CURRENT
    overloaded = worst > request.fixed_tia.overload_current.low
    text = f"{write(worst, 'A')} into U1's input"
    if worst > 1.0:
        text = f"more than {write(1.0, 'A')} into U1's input, limited by nothing but the bias supply"
    text += ", beyond its overload" if overloaded else ", within its overload"
    return FaultOutcome(text if ok else f"{text}: put a resistor in D1's bias path", ok)


def remarks(values: Values, limits: Limits, request: FixedTiaRequest) -> tuple[str, ...]:
    """How the amplifier is modelled, where its figures end, what its output needs."""
    amplifier, capacitance = request.fixed_tia, float(np.max(values["D1.capacitance"] + values["CB"]))
    found = [
        "U1 is taken as two poles with Q = 0.707 at the sheet's bandwidth, inverting; look up polarity and level of its"
        " output",
    ]
    if capacitance > amplifier.input_capacitance_max:
        allowed = write(amplifier.input_capacitance_max, "F")
        found.append(f"the detector reaches {write(capacitance, 'F')} at a corner; U1's figures hold up to {allowed}")
    if passes_dc(request) and request.load.coupling == "dc" and "ac_coupling" not in request.blocks_asked:
        found.append("the load is coupled at dc: see that it stands the level of U1's output")
    return (*found, *avalanche.remarks(request))
