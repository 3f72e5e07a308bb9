"""What the transimpedance amplifier is at a temperature, a supply and a light: its levels at DC and its figures."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers.detector import POLARITY, detected, detector_limits
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.circuits.receivers.tia.structure import bias_node, bias_supply
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.front_end import output_offset
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.preferred import CHIP_RESISTORS
from opto_ckt.request import ReceiverRequest

OFFERS = (*RECEIVER_OFFERS, "dc_offset", "dark_output")
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Strays, load, bias supply; the offset of the op amp with either sign."""
    conditions, load = request.conditions, request.load
    chip = CHIP_RESISTORS[request.preferred.resistors.size]
    offset = request.amplifier.offset_voltage
    bias = bias_supply(request)
    tolerance = conditions.supply.tolerance if request.bias is None else request.bias.tolerance
    spread = abs(bias) * tolerance if bias_node(request) == "bias" else 0.0
    limits = {
        **detector_limits(request),
        "CS": _strays(conditions.feedback_stray + chip.body_capacitance),
        "CB": _strays(conditions.board_capacitance),
        "RB": _fixed(conditions.leakage_resistance),
        "supply.bias": Limit(bias, bias - spread, bias + spread),
        "U1.offset_voltage": Limit(offset.nominal, -offset.high, offset.high),
    }
    if load.resistance is not None:
        limits["RL"] = _fixed(load.resistance)
    if load.capacitance:
        limits["CL"] = _fixed(load.capacitance)
    return limits


def _fixed(value: float) -> Limit:
    return Limit(value, value, value)


def _strays(value: float) -> Limit:
    """A stray capacitance, taken as known to 20 %."""
    return Limit(value, 0.8 * value, 1.2 * value, assumed=True)


def bias(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """Level, reverse bias, and what the diode and the amplifier are at the temperature of each lane."""
    level: float | Lanes = 0.0
    if "R2" in values:
        level = divided_voltage(voltage=values["supply.positive"], upper=values["R2"], lower=values["R3"])
    node = bias_node(request)
    far_end = level if node == "level" else values.get(f"supply.{node}", values["supply.bias"])
    reverse_bias = POLARITY[request.detector.output] * (level - far_end)
    levels = {"input_level": level, "supply.bias": far_end, "detector.reverse_bias": reverse_bias}
    biased: dict[str, float | Lanes] = {**values, **levels}
    offset = values["U1.offset_voltage"]
    drift = values.get("U1.offset_drift", 0.0) * np.abs(values["temperature"] - ROOM_TEMPERATURE)
    biased |= {
        **detected(biased, request),
        "U1.bias_current": _bias_current(values, request),
        "U1.offset": offset + np.copysign(drift, offset),
    }
    return {**biased, **_levels(biased, request)}


def _levels(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """Node voltages at the average light: the currents into the summing node balance, at finite open-loop gain."""
    sign = POLARITY[request.detector.output]
    light = values["D1.responsivity"] * values["signal.power"] + values["signal.ambient"] + values["D1.dark_current"]
    shunt, level = 1 / values["D1.shunt_resistance"], values["input_level"]
    inner = 1 / values["R1"] + 1 / values["RB"] + shunt
    wanted = level + values["U1.offset"]
    drawn = wanted * inner - level * shunt + values["U1.bias_current"] + sign * light
    output = drawn / (1 / values["R1"] + inner / values["U1.open_loop_gain"])
    return {"node.amp": output, "node.sum": wanted - output / values["U1.open_loop_gain"]}


def _bias_current(values: Values, request: ReceiverRequest) -> float | Lanes:
    """Input bias current at the temperature; that of a FET input grows like a diode's leakage. [A]"""
    doubling = request.amplifier.bias_current_doubling
    if doubling is None:
        return values["U1.bias_current"]
    return dark_current(
        dark_current=values["U1.bias_current"],
        temperature=values["temperature"],
        reference_temperature=ROOM_TEMPERATURE,
        doubling=doubling,
    )


class TiaFigures(ReceiverFigures):
    """The receiver's figures, and its levels at DC."""

    def __init__(self, values: Values, evaluation: Evaluation, request: ReceiverRequest) -> None:
        self._dark = _dark(values, request)
        super().__init__(
            values, evaluation, request, headroom=headroom(values, request), dark_shift=self._dark["shift"]
        )

    @cached_property
    def dc_offset(self) -> Lanes:
        """All errors of the output in the dark with one sign. [V]"""
        return self._dark["offset"]

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark. [V]"""
        return self._dark["output"]


def figures(values: Values, evaluation: Evaluation, request: ReceiverRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(TiaFigures(values, evaluation, request), OFFERS)


def headroom(values: Values, request: ReceiverRequest) -> float | Lanes:
    """From the level to the output's limit in the direction of the signal. [V]"""
    if POLARITY[request.detector.output] > 0:
        return values["supply.positive"] - values["U1.swing_to_positive"] - values["input_level"]
    return values["input_level"] - values["supply.negative"] - values["U1.swing_to_negative"]


def _dark(values: Values, request: ReceiverRequest) -> dict[str, Lanes]:
    """Output in the dark: all errors with one sign; the voltage itself; its shift towards the signal's limit."""
    shunt = parallel_resistance(first=values["D1.shunt_resistance"], second=values["RB"])
    dark = values["R1"] * values["D1.dark_current"]
    sign = POLARITY[request.detector.output]

    def error(offset: float | Lanes, dark_current: float | Lanes) -> Lanes:
        return np.asarray(
            output_offset(
                offset_voltage=offset,
                bias_current=values["U1.bias_current"],
                dark_current=dark_current,
                feedback_resistance=values["R1"],
                shunt_resistance=shunt,
            )
        )

    offset = values["U1.offset"]
    return {
        "offset": error(np.abs(offset), values["D1.dark_current"]),
        "output": np.asarray(values["input_level"] + sign * dark + np.copysign(1, offset) * error(np.abs(offset), 0.0)),
        "shift": np.asarray(dark + error(np.abs(offset), 0.0)),
    }


def implied(request: ReceiverRequest) -> tuple[Requirement, ...]:
    """The output must not reach its limit at the most light asked for, and the loop must not ring."""
    most = request.signal.power.high
    return (Requirement("overload", "min", most, most), Requirement("phase_margin", "min", LEAST_MARGIN, LEAST_MARGIN))


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """Avalanche gain, blocks and an AC-coupled load."""
    found = []
    if request.detector.wanted_gain not in (None, 1.0):
        found.append(Refusal(("detector", "gain"), "tia reckons with a detector without avalanche gain; leave it out"))
    if request.blocks.post_filter is not None:
        found.append(Refusal(("blocks", "post_filter"), "tia fits no filter behind the amplifier; leave it out"))
    if request.load.coupling == "ac":
        found.append(Refusal(("load", "coupling"), "tia fits no coupling capacitor; 'dc' is allowed"))
    return tuple(found)
