"""The cascode stage at the operating point of each lane, and its figures."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.receivers.amplifier import warmed
from opto_ckt.circuits.receivers.board import stray
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feed import bias_node, fed
from opto_ckt.circuits.receivers.feedback import operation
from opto_ckt.circuits.receivers.tia_cascode import transistor
from opto_ckt.formulas.front_end import output_offset
from opto_ckt.formulas.loop import noise_gain_plateau
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import CascodeRequest

OFFERS = (*operation.OFFERS, "compliance_margin")


def given(request: CascodeRequest) -> dict[str, Limit]:
    """As any such stage; board capacitance at the emitter too; a bias supply of its own lies beyond the emitter."""
    found = operation.given(request)
    if bias_node(request) == "bias":
        shift = POLARITY[request.detector.output] * request.transistor.base_emitter_voltage.nominal
        plain = found["supply.bias"]
        scale = 1 - shift / plain.nominal if plain.nominal else 1.0
        found["supply.bias"] = Limit(
            plain.nominal - shift,
            plain.nominal - shift - abs(scale) * (plain.nominal - plain.low),
            plain.nominal - shift + abs(scale) * (plain.high - plain.nominal),
        )
    return found | {"CE": stray(request.conditions.board_capacitance)}


def bias(values: Values, request: CascodeRequest) -> dict[str, float | Lanes]:
    """Q1 and the detector, each at the voltage and the current of the other; then the levels of the stage."""
    sign = POLARITY[request.detector.output]
    base, source = operation.level_voltage(values), source_resistance(values)
    found: dict[str, float | Lanes] = {
        **values,
        **warmed(values, request.amplifier),
        **fed(values, request, base - sign * values["Q1.base_emitter_voltage"]),
        "feedback_resistance": values["R1"],
        "feedback_ratio": 0.0,
        "summing_leak": 0.0,
    }
    for _ in range(2):  # the detector's current hardly depends on the tenths of a volt that the first pass is off
        current = transistor.emitter_current(found, request, base, source, detector_current(found))
        found |= transistor.resting(found, request, current)
        level = base - sign * found["Q1.control_current"] * source
        emitter = level - sign * found["Q1.base_emitter"]
        found |= {**fed(values, request, emitter), "node.emitter": emitter, "input_level": level}
    found |= {
        "summing_current": found["U1.bias_current"] + sign * found["Q1.drain_current"] - return_rail(found, request)
        / found["R5"],
        "summing_conductance": 1 / found["RB"] + 1 / found["R5"],
        "unbalanced_current": unbalanced(found, request),
    }  # fmt: skip
    return {**found, **operation.levels(found)}


def source_resistance(values: Values) -> float | Lanes:
    """Behind the level that the base sits at. [Ω]"""
    return parallel_resistance(first=values["R2"], second=values["R3"]) if "R2" in values else 0.0


def detector_current(values: Values) -> float | Lanes:
    """Of light, background and in the dark. [A]"""
    light = values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"]
    return light + values["D1.dark_current"]


def return_rail(values: Values, request: CascodeRequest) -> float | Lanes:
    """Rail that R5 goes to. [V]"""
    return values["supply.positive" if POLARITY[request.detector.output] > 0 else "supply.negative"]


def unbalanced(values: Values, request: CascodeRequest) -> Lanes:
    """Collector current in the dark less what R5 brings, in the direction of the signal. [A]"""
    sign = POLARITY[request.detector.output]
    emitter = transistor.emitter_current(
        values, request, operation.level_voltage(values), source_resistance(values), values["D1.dark_current"]
    )
    collector = emitter * values["Q1.current_gain"] / (values["Q1.current_gain"] + 1)
    back = sign * (return_rail(values, request) - values["input_level"]) / values["R5"]
    return np.asarray(collector - back)


def dark(values: Values, request: CascodeRequest) -> Mapping[str, Lanes]:
    """Output in the dark, as of any such stage, with what the bias currents leave of each other."""
    if "servo.offset" in values:
        return operation.dark(values, request)
    sign, offset, left = POLARITY[request.detector.output], values["U1.offset"], values["unbalanced_current"]
    error = np.asarray(
        output_offset(
            offset_voltage=np.abs(offset),
            bias_current=values["U1.bias_current"],
            dark_current=0.0,
            feedback_resistance=values["R1"],
            shunt_resistance=parallel_resistance(first=values["R5"], second=values["RB"]),
        )
    )
    shift = values["R1"] * left
    return {
        "offset": np.asarray(np.abs(shift) + error),
        "output": np.asarray(values["input_level"] + sign * shift + np.copysign(1, offset) * error),
        "shift": np.asarray(shift + error),
    }


class CascodeFigures(operation.FeedbackFigures):
    """Those of the stage, the detector behind its transistor."""

    def __init__(self, values: Values, evaluation: Evaluation, request: CascodeRequest) -> None:
        super().__init__(values, evaluation, request, dark(values, request))

    @cached_property
    def noise_gain(self) -> Lanes:
        """Of high frequencies, where the capacitances divide: the detector is not among them. [V/V]"""
        values = self._values
        loads = ("Q1.control_drain_capacitance", "U1.common_capacitance", "U1.differential_capacitance", "CB")
        return np.asarray(
            noise_gain_plateau(
                input_capacitance=sum(values[name] for name in loads),
                feedback_capacitance=self._feedback_capacitance(),
            )
        )

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Of the collector beyond saturation, at the average light. [V]"""
        sign, values = POLARITY[self._request.detector.output], self._values
        across = sign * (values["node.sum"] - values["node.emitter"])
        return np.broadcast_to(across - values["Q1.saturation_voltage"], self._evaluation.lanes)


def figures(values: Values, evaluation: Evaluation, request: CascodeRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(CascodeFigures(values, evaluation, request), OFFERS)


def implied(request: CascodeRequest) -> tuple[Requirement, ...]:
    """As any such stage; and Q1 must not saturate."""
    return (*operation.implied(request), Requirement("compliance_margin", "min", 0.0, 0.1))
