"""The transistor Q1 in common base: its current at the operating point, what it puts in the way of the photocurrent."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.receivers import bipolar
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.formulas import common_base
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import CascodeRequest

KIND = {"cathode": "npn", "anode": "pnp"}
"""Kind of Q1, by the end of the detector that feeds its emitter."""
LEAST_STATED = 1e-6  #: a base-emitter voltage is not taken as stated at less [A]
STEPS = 60  #: of the iteration, at most; it settles in far fewer


def pull(values: Values, request: CascodeRequest, base: float | Lanes) -> float | Lanes:
    """From the base to the rail that R4 goes to, counted the way the current flows. [V]"""
    sign = POLARITY[request.detector.output]
    return sign * (base - values["supply.negative" if sign > 0 else "supply.positive"])


def stated_current(request: CascodeRequest, emitter_resistance: float | Lanes) -> Lanes:
    """Current at which the sheet's base-emitter voltage holds: that of the design at nominal. [A]"""
    supply = request.conditions.supply
    rails = {"supply.negative": supply.negative, "supply.positive": supply.positive}
    across = pull(rails, request, request.conditions.input_level) - request.transistor.base_emitter_voltage.nominal
    return np.asarray(np.maximum(across / emitter_resistance, LEAST_STATED))


def emitter_current(
    values: Values, request: CascodeRequest, base: float | Lanes, source: float | Lanes, through: float | Lanes
) -> Lanes:
    """Where exponential law, R4 and the photocurrent meet: Newton's iteration on the logarithm of the current. [A]

    Parameters
    ----------
    base : level of the base without its current. [V]
    source : resistance behind that level. [Ω]
    through : current of the detector. [A]
    """
    stated = stated_current(request, values["R4"])
    whole = values["R4"] + source / (values["Q1.current_gain"] + 1)
    there = np.asarray(pull(values, request, base) + through * values["R4"], dtype=float)
    thermal = BOLTZMANN * np.asarray(values["temperature"]) / ELEMENTARY_CHARGE
    at_stated = base_emitter_voltage(values, stated, stated)
    x = np.log(np.maximum(there, 1e-9) / whole / stated)
    for _ in range(STEPS):
        carried = stated * np.exp(x) * whole
        step = (carried + at_stated + thermal * x - there) / (carried + thermal)
        x = x - step
        if np.max(np.abs(step)) < 1e-13:
            break
    return np.asarray(stated * np.exp(x))


def base_emitter_voltage(values: Values, stated: float | Lanes, current: float | Lanes) -> Lanes:
    """At a current and the temperature. [V]"""
    return np.asarray(
        common_base.base_emitter_voltage(
            base_emitter_voltage=values["Q1.base_emitter_voltage"],
            stated_current=stated,
            current=current,
            temperature=values["temperature"],
            reference_temperature=ROOM_TEMPERATURE,
            coefficient=bipolar.DRIFT,
        )
    )


def resting(values: Values, request: CascodeRequest, emitter: Lanes) -> dict[str, float | Lanes]:
    """Small-signal figures of Q1 and its voltages at a current of its emitter."""
    gain = values["Q1.current_gain"]
    volts = base_emitter_voltage(values, stated_current(request, values["R4"]), emitter)
    return {
        "Q1.emitter_current": emitter,
        **bipolar.small_signal(values, "Q1", emitter * gain / (gain + 1), volts),
    }


def pole(values: Values) -> float | Lanes:
    """At the emitter. [Hz]"""
    return common_base.input_pole(
        current=values["Q1.emitter_current"],
        capacitance=values["D1.capacitance"] + values["CE"] + values["Q1.control_source_capacitance"],
        temperature=values["temperature"],
    )
