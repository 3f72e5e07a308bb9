"""What a transimpedance stage is at a temperature, a supply and a light: its levels at DC and its figures.

What depends on the feedback reads ``feedback_resistance`` and ``feedback_ratio``, which `biased` writes: R1 and
nothing, or what a network in its place has.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.board import load_limits, summing_node_limits
from opto_ckt.circuits.receivers.detector import POLARITY, detector_limits
from opto_ckt.circuits.receivers.feed import bias_limit, fed
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.formulas.front_end import output_offset
from opto_ckt.formulas.loop import noise_gain_plateau
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import OpAmpReceiverRequest

OFFERS = (*RECEIVER_OFFERS, "noise_gain", "dc_offset", "dark_output")
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]


def given(request: OpAmpReceiverRequest) -> dict[str, Limit]:
    """Strays, load, bias supply; the offset of the op amp with either sign."""
    return {
        **detector_limits(request),
        **summing_node_limits(request),
        **load_limits(request),
        **either_sign(request.amplifier),
        "supply.bias": bias_limit(request),
    }


def bias(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    """Level, reverse bias, and what the diode and the amplifier are at the temperature of each lane; R1 alone."""
    return biased(values, request, values["R1"])


def biased(
    values: Values,
    request: OpAmpReceiverRequest,
    feedback: float | Lanes,
    ratio: float | Lanes = 0.0,
    *,
    series: float | Lanes = 0.0,
    leak: float | Lanes = 0.0,
) -> dict[str, float | Lanes]:
    """As `bias`, with any feedback, and with what a circuit has of its own.

    Parameters
    ----------
    feedback : output voltage for a current into the summing node. [Ω]
    ratio : gain from the summing node's voltage to the output at no current, less 1. [V/V]
    series : between the detector and its supply, besides a filter's. [Ω]
    leak : current that parts beside detector and amplifier draw from the summing node. [A]
    """
    level = level_voltage(values)
    found: dict[str, float | Lanes] = {
        **values,
        **fed(values, request, level, series=series),
        **warmed(values, request.amplifier),
        "feedback_resistance": feedback,
        "feedback_ratio": ratio,
        "summing_leak": leak,
    }
    found |= _drawn(found, request)
    return {**found, **levels(found)}


def level_voltage(values: Values) -> float | Lanes:
    """Of the + input: ground, or what the divider of a single supply makes. [V]"""
    if "R2" not in values:
        return 0.0
    return divided_voltage(voltage=values["supply.positive"], upper=values["R2"], lower=values["R3"])


def _drawn(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    """What the summing node is drawn from at the average light: a current at 0 V [A], a conductance [S]."""
    sign, shunt = POLARITY[request.detector.output], 1 / values["D1.shunt_resistance"]
    light = values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"]
    current = values["U1.bias_current"] - values["input_level"] * shunt + sign * (light + values["D1.dark_current"])
    return {
        "summing_current": current + values["summing_leak"],
        "summing_conductance": 1 / values["RB"] + shunt,
    }


def levels(values: Values) -> dict[str, float | Lanes]:
    """Node voltages at rest: the currents into the summing node balance, at finite open-loop gain."""
    wanted, feedback = values["input_level"] + values["U1.offset"], values["feedback_resistance"]
    gain = 1 + values["feedback_ratio"] + feedback * values["summing_conductance"]
    output = (wanted * gain + feedback * values["summing_current"]) / (1 + gain / values["U1.open_loop_gain"])
    return {"node.amp": output, "node.sum": wanted - output / values["U1.open_loop_gain"]}


class FeedbackFigures(ReceiverFigures):
    """The receiver's figures, and its levels at DC."""

    def __init__(
        self,
        values: Values,
        evaluation: Evaluation,
        request: OpAmpReceiverRequest,
        at_dark: Mapping[str, Lanes] | None = None,
    ) -> None:
        self._dark = dark(values, request) if at_dark is None else at_dark
        super().__init__(
            values,
            evaluation,
            request,
            headroom=self._headroom_of(values, request),
            dark_shift=self._dark["shift"],
            stage_gain=values["feedback_resistance"] if request.blocks_asked else None,
        )

    def _headroom_of(self, values: Values, request: OpAmpReceiverRequest) -> float | Lanes:
        """In the direction of the signal. [V]"""
        return rooms(values, request)[int(POLARITY[request.detector.output])]

    @cached_property
    def noise_gain(self) -> Lanes:
        """Of high frequencies, where the capacitances divide: 1 + C_in/C_f. [V/V]"""
        return np.asarray(
            noise_gain_plateau(
                input_capacitance=self._input_capacitance(), feedback_capacitance=self._feedback_capacitance()
            )
        )

    def _input_capacitance(self) -> Lanes | float:
        """Of the summing node, without the feedback. [F]"""
        values = self._values
        loads = ("D1.capacitance", "U1.common_capacitance", "U1.differential_capacitance", "CB")
        return sum((values[name] for name in loads), values.get("C3", 0.0))

    def _feedback_capacitance(self) -> Lanes | float:
        """From the output to the summing node, strays included. [F]"""
        return self._values["C1"] + self._values["CS"]

    @cached_property
    def dc_offset(self) -> Lanes:
        """All errors of the output in the dark with one sign. [V]"""
        later = self._values.get("filter.offset", 0.0)
        return self._behind(self._dark["offset"], 1.0) + later

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark. [V]"""
        return self._behind(self._dark["output"], np.sign(self._values.get("second.offset", 0.0)))

    def _behind(self, level: Lanes, sign: Lanes | float) -> Lanes:
        """A level of the amplifier behind the gain stage, where there is one, whose own error has a sign. [V]"""
        values = self._values
        return np.asarray(level * values.get("second.gain", 1.0) + sign * np.abs(values.get("second.offset", 0.0)))


def figures(values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(FeedbackFigures(values, evaluation, request), OFFERS)


def rooms(values: Values, request: OpAmpReceiverRequest) -> dict[int, float | Lanes]:
    """From the level upwards (1) and downwards (-1) to the output's limit: a rail's, or that of its current. [V]"""
    rails = {
        1: values["supply.positive"] - values["U1.swing_to_positive"] - values["input_level"],
        -1: values["input_level"] - values["supply.negative"] - values["U1.swing_to_negative"],
    }
    return {sign: np.minimum(rail, _driven(values, request, sign)) for sign, rail in rails.items()}


def _driven(values: Values, request: OpAmpReceiverRequest, sign: int) -> float | Lanes:
    """How far the output gets on its largest current, which feeds the feedback and a load at the output. [V]"""
    conductance = 1 / values["feedback_resistance"]
    drive = values["U1.output_current_max"]
    if "RL" in values and "gain_stage" not in request.blocks_asked:
        drive = drive - sign * values["input_level"] / values["RL"]
        conductance = conductance + 1 / values["RL"]
    return drive / conductance


def dark(values: Values, request: OpAmpReceiverRequest) -> dict[str, Lanes]:
    """Output in the dark: all errors with one sign; the voltage itself; its shift towards the signal's limit.

    A servo holds the output, whatever the errors before it.
    """
    if "servo.offset" in values:
        held = np.asarray(values["servo.offset"], dtype=float)
        return {"offset": np.abs(held), "output": values["input_level"] + held, "shift": np.abs(held)}
    shunt = parallel_resistance(first=values["D1.shunt_resistance"], second=values["RB"])
    shift = values["feedback_resistance"] * values["D1.dark_current"]
    sign, offset = POLARITY[request.detector.output], values["U1.offset"]

    def error(dark_current: float | Lanes) -> Lanes:
        return np.asarray(
            values["feedback_ratio"] * np.abs(offset)
            + output_offset(
                offset_voltage=np.abs(offset),
                bias_current=values["U1.bias_current"] + np.abs(values["summing_leak"]),
                dark_current=dark_current,
                feedback_resistance=values["feedback_resistance"],
                shunt_resistance=shunt,
            )
        )

    return {
        "offset": error(values["D1.dark_current"]),
        "output": np.asarray(values["input_level"] + sign * shift + np.copysign(1, offset) * error(0.0)),
        "shift": np.asarray(shift + error(0.0)),
    }


def implied(request: OpAmpReceiverRequest) -> tuple[Requirement, ...]:
    """The output must not reach its limit at the most light asked for, and the loop must not ring."""
    most, gain = request.signal.power.high, request.amplifier.minimum_stable_gain.nominal
    needs = [Requirement("overload", "min", most, most), Requirement("phase_margin", "min", LEAST_MARGIN, LEAST_MARGIN)]
    return (*needs, Requirement("noise_gain", "min", gain, 1.0)) if gain > 1 else tuple(needs)
