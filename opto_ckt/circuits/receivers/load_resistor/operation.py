"""What the receiver is at a temperature, a supply and a light: its levels at DC and its figures."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.board import exactly, load_limits, stray
from opto_ckt.circuits.receivers.detector import POLARITY, detector_limits, direction, one_level
from opto_ckt.circuits.receivers.feed import bias_limit, fed
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.circuits.receivers.load_resistor import level_buffer
from opto_ckt.circuits.receivers.load_resistor.form import amplified, equalised
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import LoadResistorRequest

OFFERS = (*RECEIVER_OFFERS, "dc_offset", "dark_output")
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]
PHOTOVOLTAIC = 0.2  #: drop up to which an unbiased diode still follows the light, common practice [V]


def given(request: LoadResistorRequest) -> dict[str, Limit]:
    """Board, load, bias supply; offsets with either sign."""
    return {
        **detector_limits(request),
        "CB": stray(request.conditions.board_capacitance),
        "RB": exactly(request.conditions.leakage_resistance),
        **load_limits(request),
        **either_sign(request.amplifier),
        **level_buffer.given(request),
        "supply.bias": bias_limit(request),
    }


def bias(values: Values, request: LoadResistorRequest) -> dict[str, float | Lanes]:
    """Level, reverse bias after the drop across R1, levels at the average light."""
    foot = level_buffer.levels(values, request)
    gain = 1 + values["R4"] / values["R5"] if amplified(request) else 1.0
    found = {
        **values,
        **fed(values, request, foot.get("node.level", 0.0), load=values["R1"]),
        **warmed(values, request.amplifier),
        **foot,
        "buffer.gain": gain,
        "load.transimpedance": values["R1"] * gain,
    }
    return {**found, **_levels(found, request)}


def _behind(values: Values, request: LoadResistorRequest) -> float | Lanes:
    """Resistance that the bias current of the inverting input flows through. [Ω]"""
    if amplified(request):
        return parallel_resistance(first=values["R4"], second=values["R5"])
    return values["R4"] if equalised(request) else 0.0


def _levels(values: Values, request: LoadResistorRequest) -> dict[str, float | Lanes]:
    sign, level, gain = POLARITY[request.detector.output], values["input_level"], values["buffer.gain"]
    light = values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"]
    current = sign * (light + values["D1.dark_current"]) + values["U1.bias_current"]
    summed = (level / values["R1"] - current) / (1 / values["R1"] + 1 / values["RB"])
    driven = summed + values["U1.offset"] + values["U1.bias_current"] * _behind(values, request)
    driven = driven - level * (1 - 1 / gain)
    return {"node.sum": summed, "node.amp": driven / (1 / gain + 1 / values["U1.open_loop_gain"])}


def rooms(values: Values, request: LoadResistorRequest) -> dict[str, float | Lanes]:
    """From the level to where the node of R1 may go with the light, by what ends there. [V]

    The output's limit counts back through the gain; the diode's bias is shared with a filter's resistor.
    """
    level, gain, sign = values["input_level"], values["buffer.gain"], POLARITY[request.detector.output]
    if direction(request) > 0:
        output = values["supply.positive"] - values["U1.swing_to_positive"] - level
        common = values["supply.positive"] - values.get("U1.common_mode_to_positive", 0.0) - level
    else:
        output = level - values["supply.negative"] - values["U1.swing_to_negative"]
        common = level - values["supply.negative"] - values.get("U1.common_mode_to_negative", 0.0)
    bias = np.maximum(sign * (level - values["supply.bias"]), PHOTOVOLTAIC)
    shared = values["R1"] / (values["R1"] + values["R10"]) if "R10" in values else 1.0
    return {"output of U1": output / gain, "common mode of U1": common, "bias of D1": bias * shared}


class LoadFigures(ReceiverFigures):
    """The receiver's figures, and its levels at DC."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LoadResistorRequest) -> None:
        gain = values["buffer.gain"]
        currents = values["U1.bias_current"] * (values["R1"] + _behind(values, request))
        self._error = gain * (currents + np.abs(values["U1.offset"]))
        self._dark = gain * values["R1"] * values["D1.dark_current"]
        headroom = np.minimum.reduce(np.broadcast_arrays(*rooms(values, request).values()))
        super().__init__(
            values,
            evaluation,
            request,
            headroom=gain * headroom,
            dark_shift=self._dark + self._error,
            stage_gain=values["load.transimpedance"],
        )

    @cached_property
    def dc_offset(self) -> Lanes:
        """All errors of the output in the dark with one sign, that of a level's buffer too. [V]"""
        return np.asarray(self._dark + self._error + np.abs(self._values.get("U2.offset", 0.0)))

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark. [V]"""
        offset = np.copysign(self._error, self._values["U1.offset"])
        return np.asarray(self._values["input_level"] + direction(self._request) * self._dark + offset)


def figures(values: Values, evaluation: Evaluation, request: LoadResistorRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(LoadFigures(values, evaluation, request), OFFERS)


def implied(request: LoadResistorRequest) -> tuple[Requirement, ...]:
    """The output must not reach its limit at the most light asked for, and the loop must not ring."""
    most = request.signal.power.high
    return (Requirement("overload", "min", most, most), Requirement("phase_margin", "min", LEAST_MARGIN, LEAST_MARGIN))


def most_current(values: Values, request: LoadResistorRequest) -> float | Lanes:
    """Through R1: a one, ambient light and dark current. [A]"""
    return one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]


def refused(request: LoadResistorRequest) -> tuple[Refusal, ...]:
    """What no receiver does, and a level's buffer that rings."""
    return (*refusals.refused(request), *level_buffer.refused(request))
