"""What the receiver is at a temperature, a supply and a light: its levels at DC and its figures."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.board import exactly, load_limits, stray
from opto_ckt.circuits.receivers.detector import POLARITY, detector_limits, one_level
from opto_ckt.circuits.receivers.feed import bias_limit, fed
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.circuits.receivers.load_resistor.structure import amplified
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import OpAmpReceiverRequest

OFFERS = (*RECEIVER_OFFERS, "dc_offset", "dark_output")
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]


def given(request: OpAmpReceiverRequest) -> dict[str, Limit]:
    """Board, load, bias supply; the offset of the op amp with either sign."""
    return {
        **detector_limits(request),
        "CB": stray(request.conditions.board_capacitance),
        "RB": exactly(request.conditions.leakage_resistance),
        **load_limits(request),
        **either_sign(request.amplifier),
        "supply.bias": bias_limit(request),
    }


def bias(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    """Level, reverse bias after the drop across R1, levels at the average light."""
    level: float | Lanes = 0.0
    if "R2" in values:
        level = divided_voltage(voltage=values["supply.positive"], upper=values["R2"], lower=values["R3"])
    found = {
        **values,
        **fed(values, request, level, load=values["R1"]),
        **warmed(values, request.amplifier),
        "buffer.gain": 1 + values["R4"] / values["R5"] if amplified(request) else 1.0,
    }
    return {**found, **_levels(found, request)}


def _levels(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    sign, level = POLARITY[request.detector.output], values["input_level"]
    light = values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"]
    current = sign * (light + values["D1.dark_current"]) + values["U1.bias_current"]
    summed = (level / values["R1"] - current) / (1 / values["R1"] + 1 / values["RB"])
    back: float | Lanes = 0.0
    if "R4" in values:
        back = values["R4"] if not amplified(request) else parallel_resistance(first=values["R4"], second=values["R5"])
    gain = values["buffer.gain"]
    driven = summed + values["U1.offset"] + values["U1.bias_current"] * back
    return {"node.sum": summed, "node.amp": driven / (1 / gain + 1 / values["U1.open_loop_gain"])}


def headroom(values: Values, request: OpAmpReceiverRequest) -> Lanes:
    """From the level of R1 to the nearest limit for the signal: output, common mode, and the bias of the diode. [V]"""
    level, gain = values["input_level"], values["buffer.gain"]
    if POLARITY[request.detector.output] < 0:
        output = values["supply.positive"] - values["U1.swing_to_positive"]
        common = values["supply.positive"] - values.get("U1.common_mode_to_positive", 0.0)
        limits = (output / gain - level, common - level)
    else:
        output = values["supply.negative"] + values["U1.swing_to_negative"]
        common = values["supply.negative"] + values.get("U1.common_mode_to_negative", 0.0)
        limits = (level - output / gain, level - common)
    return np.minimum(np.minimum(*limits), np.maximum(request.detector.resting_bias, PHOTOVOLTAIC))


PHOTOVOLTAIC = 0.2  #: drop up to which an unbiased diode still follows the light, common practice [V]


class LoadFigures(ReceiverFigures):
    """The receiver's figures, and its levels at DC."""

    def __init__(self, values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> None:
        gain = values["buffer.gain"]
        self._error = gain * (values["R1"] * values["U1.bias_current"] + np.abs(values["U1.offset"]))
        self._dark = gain * values["R1"] * values["D1.dark_current"]
        super().__init__(
            values,
            evaluation,
            request,
            headroom=gain * headroom(values, request),
            dark_shift=self._dark + self._error,
            stage_gain=values["R1"] * gain,
        )

    @cached_property
    def dc_offset(self) -> Lanes:
        """All errors of the output in the dark with one sign. [V]"""
        return np.asarray(self._dark + self._error)

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark. [V]"""
        values = self._values
        falling = POLARITY[self._request.detector.output]
        offset = np.copysign(self._error, values["U1.offset"])
        return np.asarray(values["input_level"] - falling * self._dark + offset)


def figures(values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(LoadFigures(values, evaluation, request), OFFERS)


def implied(request: OpAmpReceiverRequest) -> tuple[Requirement, ...]:
    """The output must not reach its limit at the most light asked for, and the loop must not ring."""
    most = request.signal.power.high
    return (Requirement("overload", "min", most, most), Requirement("phase_margin", "min", LEAST_MARGIN, LEAST_MARGIN))


def most_current(values: Values, request: OpAmpReceiverRequest) -> float | Lanes:
    """Through R1: a one, ambient light and dark current. [A]"""
    return one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]


def refused(request: OpAmpReceiverRequest) -> tuple[Refusal, ...]:
    """A level above ground, which an amplifier with gain at DC would lift too."""
    found = refusals.refused(request)
    if amplified(request) and request.conditions.input_level > 0:
        message = "the gain that require.transimpedance asks for would lift it too: it needs a negative supply and 0 V"
        return (*found, Refusal(("conditions", "input_level"), message))
    return found
