"""Operating point of the pair, closed form, and the figures that follow."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.receivers import bipolar
from opto_ckt.circuits.receivers.board import dc_load, load_limits, summing_node_limits
from opto_ckt.circuits.receivers.detector import POLARITY, detector_limits
from opto_ckt.circuits.receivers.feed import bias_limit, fed
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import DiscreteRequest

OFFERS = (*RECEIVER_OFFERS, "dark_output", "compliance_margin")
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]
LEAST_CURRENT = 1e-9  #: of a transistor that the light has turned off [A]


def given(request: DiscreteRequest) -> dict[str, Limit]:
    """Strays, load, bias supply."""
    return {
        **detector_limits(request),
        **summing_node_limits(request),
        **load_limits(request),
        "supply.bias": bias_limit(request),
    }


def bias(values: Values, request: DiscreteRequest) -> dict[str, float | Lanes]:
    """The detector in its feed, both transistors at the average light."""
    drops = {ref: junction(values, ref) for ref in ("Q1", "Q2")}
    found = {**values, **fed(values, request, drops["Q1"])}
    light = found["D1.responsivity"] * found["signal.power"] + found["D1.ambient_current"] + found["D1.dark_current"]
    point = resting(found, request, POLARITY[request.detector.output] * light)
    return {
        **found,
        **bipolar.small_signal(found, "Q1", point["collector"], drops["Q1"]),
        **bipolar.small_signal(found, "Q2", point["follower"], drops["Q2"]),
        "node.sum": drops["Q1"],
        "node.col": point["col"],
        "node.amp": point["amp"],
        "feedback_resistance": values["R1"],
    }


def junction(values: Values, ref: str) -> float | Lanes:
    """Base-emitter voltage at the temperature. [V]"""
    return values[f"{ref}.base_emitter_voltage"] + bipolar.DRIFT * (values["temperature"] - ROOM_TEMPERATURE)


def resting(values: Values, request: DiscreteRequest, drawn: float | Lanes) -> dict[str, float | Lanes]:
    """Levels and currents for a steady current drawn from the summing node [A]; linear in the base current of Q1."""
    first, second = junction(values, "Q1"), junction(values, "Q2")
    gain, follower = values["Q1.current_gain"], values["Q2.current_gain"] + 1
    leak = first / values["RB"]
    current = drawn + leak
    level = first + current * values["R1"]
    resistance = values["R1"]
    negative, supply = values["supply.negative"], values["supply.positive"]
    emitter_load, load = 1 / values["R3"], 1 / dc_load(values, request)
    share = values["R2"] / follower
    loaded = share * ((level - negative) * emitter_load + level * load + current)
    stiffness = gain * values["R2"] + resistance + share * (resistance * (emitter_load + load) + 1)
    base = np.maximum((supply - second - level - loaded) / stiffness, LEAST_CURRENT / gain)
    amp = level + base * resistance
    emitter = np.maximum((amp - negative) * emitter_load + amp * load + base + current, LEAST_CURRENT)
    return {
        "amp": amp,
        "col": amp + second,
        "collector": gain * base,
        "follower": emitter * values["Q2.current_gain"] / follower,
    }


def top(values: Values, request: DiscreteRequest) -> Lanes:
    """Highest level of the output: Q1 off, R2 feeding the base of Q2. [V]"""
    fed_by = (values["Q2.current_gain"] + 1) / values["R2"]
    loaded = 1 / values["R3"] + 1 / dc_load(values, request)
    level = values["supply.positive"] - junction(values, "Q2")
    return np.asarray((level * fed_by + values["supply.negative"] / values["R3"]) / (fed_by + loaded))


class DiscreteFigures(ReceiverFigures):
    """The receiver's figures, its level in the dark, what the transistors have left."""

    def __init__(self, values: Values, evaluation: Evaluation, request: DiscreteRequest) -> None:
        sign = POLARITY[request.detector.output]
        self._dark = resting(values, request, sign * values["D1.dark_current"])
        rising = top(values, request) - self._dark["amp"]
        cut_off = (self._dark["amp"] - values["supply.negative"]) * values["R1"] / (values["R1"] + values["R3"])
        saturated = self._dark["amp"] + junction(values, "Q2") - values["Q1.saturation_voltage"]
        super().__init__(
            values,
            evaluation,
            request,
            headroom=rising if sign > 0 else np.minimum(cut_off, saturated),
            dark_shift=0.0,
            stage_gain=values["R1"],
        )

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark. [V]"""
        return np.asarray(self._dark["amp"] * np.ones(self._evaluation.lanes))

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Least that either transistor has beyond its saturation at the average light. [V]"""
        values = self._values
        first = values["node.col"] - values["Q1.saturation_voltage"]
        second = values["supply.positive"] - values["node.amp"] - values["Q2.saturation_voltage"]
        return np.asarray(np.minimum(first, second) * np.ones(self._evaluation.lanes))


def figures(values: Values, evaluation: Evaluation, request: DiscreteRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(DiscreteFigures(values, evaluation, request), OFFERS)


def implied(request: DiscreteRequest) -> tuple[Requirement, ...]:
    """The output must not reach its limit, the loop must not ring, no transistor may saturate."""
    most = request.signal.power.high
    return (
        Requirement("overload", "min", most, most),
        Requirement("phase_margin", "min", LEAST_MARGIN, LEAST_MARGIN),
        Requirement("compliance_margin", "min", 0.0, 0.1),
    )
