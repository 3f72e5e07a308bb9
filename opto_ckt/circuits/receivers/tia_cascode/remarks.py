"""What a designer ought to be told about a sized cascode: what it buys, what its bias currents cost."""

from __future__ import annotations

from math import hypot

import numpy as np

from opto_ckt.circuits.receivers.feed import bias_node
from opto_ckt.circuits.receivers.feedback import remarks as feedback
from opto_ckt.circuits.receivers.feedback.comparison import compared, first_lane, said
from opto_ckt.circuits.receivers.tia_cascode import structure, transistor
from opto_ckt.circuits.receivers.tia_cascode.bias import LEAST_CURRENT
from opto_ckt.formulas import noise
from opto_ckt.limits import Limits, Values
from opto_ckt.request import CascodeRequest
from opto_ckt.units import write


def remarks(values: Values, limits: Limits, request: CascodeRequest) -> tuple[str, ...]:
    """What the transistor buys and costs, its pole, the bias it takes off; then what is said of any such stage."""
    nominal = first_lane(values)
    whole = write(nominal["D1.capacitance"], "F")
    found = [
        f"Q1 keeps the {whole} of D1 off the summing node; "
        + said(compared(structure.topology(request), values, request), request),
        *_pole(values, nominal),
        *_unbalanced(values),
    ]
    if bias_node(request) != "bias":
        left = float(np.min(values["detector.reverse_bias"]))
        found.append(
            f"D1 is left with {write(left, 'V')} of its {write(request.detector.resting_bias, 'V')} of bias at the"
            " least: the emitter lies a base-emitter voltage beside the level"
        )
    found.append("the collector works at about 0 V against the base: its capacitance is above a sheet's at volts")
    return (*found, *feedback.remarks(values, limits, request))


def _pole(values: Values, nominal: Values) -> list[str]:
    """Pole at the emitter, the noise that passes below it and the one that comes in above."""
    least, current = float(np.min(transistor.pole(values))), float(nominal["Q1.emitter_current"])
    base = noise.shot_noise(current=nominal["Q1.control_current"])
    resistors = [
        float(noise.thermal_current_noise(resistance=nominal[ref], temperature=nominal["temperature"]))
        for ref in ("R4", "R5")
    ]
    found = [
        f"pole at the emitter {write(float(transistor.pole(nominal)), 'Hz')}, {write(least, 'Hz')} at its lowest; at"
        f" all frequencies R4 and R5 add {write(hypot(*resistors), 'A/√Hz')}, the base current"
        f" {write(float(base), 'A/√Hz')}; above the pole the collector's shot noise,"
        f" {write(float(noise.shot_noise(current=nominal['Q1.drain_current'])), 'A/√Hz')}, comes in"
    ]
    if current < LEAST_CURRENT:
        found.append(
            f"Q1 rests at {write(current, 'A')}: below {write(LEAST_CURRENT, 'A')} a transistor loses current gain and"
            " speed, look up both at this current"
        )
    return found


def _unbalanced(values: Values) -> list[str]:
    """What the bias currents leave of each other, as current and at the output."""
    left = np.abs(np.asarray(values["unbalanced_current"]))
    if "servo.offset" in values:
        return [
            f"bias currents of Q1 differ by up to {write(float(np.max(left)), 'A')}: the servo has to take that too"
        ]
    at_output = float(np.max(left * values["R1"]))
    return [
        f"bias currents of Q1 differ by up to {write(float(np.max(left)), 'A')} over supplies, heat and tolerance,"
        f" {write(at_output, 'V')} at the output: rails that move together, a servo or ac coupling help"
    ]
