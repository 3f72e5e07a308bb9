"""The source follower J1: its bias at the operating point, and what it makes of the detector's capacitance."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas import junction_fet
from opto_ckt.formulas.front_end import bootstrapped_capacitance
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.formulas.transistor import follower_gain
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import BootstrapRequest

POLARITY: Mapping[str, int] = {"njf": 1, "pjf": -1}
"""Sign of the current out of the source, and of the source's voltage above the gate, by the kind of J1."""

LONG_CHANNEL = 2 / 3  #: least noise factor of a channel, A. van der Ziel 1962


def pull(values: Values, request: BootstrapRequest, gate: float | Lanes) -> float | Lanes:
    """From the gate to the rail that R4 goes to, counted the way the current flows. [V]"""
    sign = POLARITY[request.follower.kind]
    return sign * (gate - values["supply.negative" if sign > 0 else "supply.positive"])


def leakage(values: Values, request: BootstrapRequest) -> float | Lanes:
    """Of the gate at the temperature; none where the sheet does not state it. [A]"""
    return np.asarray(
        dark_current(
            dark_current=values.get("J1.gate_current", 0.0),
            temperature=values["temperature"],
            reference_temperature=ROOM_TEMPERATURE,
            doubling=request.follower.gate_current_doubling,
        )
    )


def resting(values: Values, request: BootstrapRequest, gate: float | Lanes) -> dict[str, float | Lanes]:
    """J1 at rest with its gate at a voltage: current, small-signal figures, level of its source, noise.

    The channel's noise is what the sheet states at the gate, but never less than that of a long channel at the
    current that flows here.
    """
    sign = POLARITY[request.follower.kind]
    sheet = {
        "saturation_current": values["J1.saturation_current"],
        "pinch_off_voltage": values["J1.pinch_off_voltage"],
    }
    there = np.maximum(pull(values, request, gate), -np.asarray(values["J1.pinch_off_voltage"]))
    current = junction_fet.self_biased_current(**sheet, source_resistance=values["R4"], pull=there)
    transconductance = junction_fet.transconductance(**sheet, current=current)
    reverse = junction_fet.gate_reverse_voltage(**sheet, current=current)
    drain = values["supply.positive" if sign > 0 else "supply.negative"]
    stated = junction_fet.channel_noise_factor(
        voltage_noise=values["J1.voltage_noise"],
        transconductance=transconductance,
        temperature=values["temperature"],
    )
    return {
        "J1.drain_current": current,
        "J1.transconductance": transconductance,
        "J1.input_conductance": 0.0,
        "J1.output_conductance": 0.0,
        "J1.control_source_capacitance": values["J1.gate_source_capacitance"],
        "J1.control_drain_capacitance": values["J1.gate_drain_capacitance"],
        "J1.channel_noise_factor": np.maximum(stated, LONG_CHANNEL),
        "J1.control_current": leakage(values, request),
        "J1.reverse": reverse,
        "J1.across": sign * (drain - gate) - reverse,
        "node.follow": gate + sign * reverse,
    }


def load_resistance(values: Values) -> float | Lanes:
    """At the source of J1, for signals. [Ω]"""
    return parallel_resistance(first=values["R4"], second=values["R5"])


def gain(values: Values) -> float | Lanes:
    """Of the follower, for signals above the corner of C4. [V/V]"""
    return follower_gain(transconductance=values["J1.transconductance"], load_resistance=load_resistance(values))


def left_capacitance(values: Values) -> float | Lanes:
    """What detector and follower together put on the summing node. [F]"""
    return bootstrapped_capacitance(
        diode=values["D1.capacitance"],
        gate_drain=values["J1.control_drain_capacitance"],
        gate_source=values["J1.control_source_capacitance"],
        follower_gain=gain(values),
    )


def own_bandwidth(values: Values) -> float | Lanes:
    """Of the follower in the way of the photocurrent. [Hz]"""
    return junction_fet.bootstrap_bandwidth(
        transconductance=values["J1.transconductance"],
        load_resistance=load_resistance(values),
        diode=values["D1.capacitance"],
        gate_source=values["J1.control_source_capacitance"],
    )


def margin(values: Values) -> Lanes:
    """From what J1 has to what it needs: drain-source voltage beyond pinch-off, or its gate short of conducting. [V]"""
    beyond = values["J1.across"] - (values["J1.pinch_off_voltage"] - values["J1.reverse"])
    return np.asarray(np.minimum(beyond, values["J1.reverse"]))
