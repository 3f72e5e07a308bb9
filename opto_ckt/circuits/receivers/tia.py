r"""Transimpedance amplifier with resistive feedback, one op amp.

               +---[ R1 ]---+
               +---[ C1 ]---+
               |   |\       |
    bias --D1--+---|- \     |
              sum  | U1 >---+--- amp --- post --- out
           level --|+ /
                   |/

``level`` is ground, or with a single supply a divider R2, R3 with C2 across R3. Either end of D1 feeds the amplifier.
"""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import Bench, Circuit, Fitted, Heat, OnDemand, Stress
from opto_ckt.circuits.receivers import tia_faults, tia_sizing, tia_window
from opto_ckt.circuits.receivers.detector import (
    POLARITY,
    detected,
    detector_limits,
    level_factor,
    noise_band,
    noise_frequency,
)
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.circuits.receivers.tia_starter import STARTER
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.formulas.front_end import output_offset
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.preferred import CHIP_RESISTORS
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import (
    DOWN,
    GROUND,
    RIGHT,
    UP,
    Capacitor,
    Element,
    OpAmp,
    Photodiode,
    Point,
    Resistor,
    Supply,
    Terminal,
    Topology,
)

OFFERS = (*RECEIVER_OFFERS, "dc_offset", "dark_output")
SUM: Point = (3, 2.5)
LEAST_MARGIN = 45.0  #: of the phase, where no other bound is asked for; common practice [°]


def topology(request: ReceiverRequest) -> Topology:
    """The amplifier, its level if the supply is single, strays, load and supply bypass."""
    supply = request.conditions.supply
    negative = "negative" if supply.negative else GROUND
    raised = request.conditions.input_level > 0
    level = "level" if raised else GROUND
    bias = _bias_node(request)
    elements: list[Element] = [
        _photodiode(request, bias),
        Resistor("R1", "sum", "amp", role="feedback", at=(5, 4.5), to=(9, 4.5)),
        Capacitor("C1", "sum", "amp", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=level, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(6, 2), facing=RIGHT),
        Capacitor("C8", "positive", GROUND, role="bypass", stock="bypass", at=(13, 2.5), to=(13, 0.5)),
        Supply("VP", "positive", value="supply.positive"),
        Terminal("OUT", "out", at=(10.5, 2)),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [((7, 3), "positive"), ((7, 1), negative)]
    marks += [((13, 2.5), "positive"), ((13, 0.5), GROUND), (_bias_point(request), bias)]
    if bias == "bias":
        elements.append(Supply("VB", "bias", value="supply.bias"))
    if negative != GROUND:
        elements += [
            Supply("VN", "negative", value="supply.negative"),
            Capacitor("C9", GROUND, "negative", role="bypass", stock="bypass", at=(14.5, 2.5), to=(14.5, 0.5)),
        ]
        marks += [((14.5, 2.5), GROUND), ((14.5, 0.5), "negative")]
    if raised:
        elements += [
            Resistor("R2", "positive", "level", role="level", at=(13, 8), to=(13, 6)),
            Resistor("R3", "level", GROUND, role="level", at=(13, 6), to=(13, 4)),
            Capacitor("C2", "level", GROUND, role="level filter", stock="bypass", at=(14.5, 6), to=(14.5, 4)),
        ]
        marks += [((13, 8), "positive"), ((13, 4), GROUND), ((14.5, 4), GROUND)]
        marks += [((12.2, 6), "level"), ((5.4, 1.5), "level")]
    else:
        marks.append(((5.4, 1), GROUND))
    elements += _load(request)
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="U1",
        wires=(
            (SUM, (6, 2.5)),
            ((5, 2.5), (5, 6)),
            ((9, 2), (9, 6)),
            ((8, 2), (10.5, 2)),
            ((5.4, 1.5), (6, 1.5)),
            *((((12.2, 6), (14.5, 6)),) if raised else (((5.4, 1.5), (5.4, 1)),)),
        ),
        marks=tuple(marks),
        slots={"post": ("amp", "out")},
    )


def _photodiode(request: ReceiverRequest, bias: str) -> Photodiode:
    end = _bias_point(request)
    if request.detector.output == "cathode":
        return Photodiode("D1", anode=bias, cathode="sum", role="detector", table="detector", at=end, to=SUM, facing=UP)
    return Photodiode("D1", anode="sum", cathode=bias, role="detector", table="detector", at=SUM, to=end, facing=DOWN)


def _bias_point(request: ReceiverRequest) -> Point:
    """Where the far end of the diode lies: below where it goes to a lower voltage, above where to a higher one."""
    return (3, 0.5) if request.detector.output == "cathode" else (3, 4.5)


def _bias_supply(request: ReceiverRequest) -> float:
    """Voltage of the diode's far end that gives the reverse bias asked for. [V]"""
    return request.conditions.input_level - POLARITY[request.detector.output] * request.detector.reverse_bias


def _bias_node(request: ReceiverRequest) -> str:
    """Node of the diode's far end: ground or a rail where that gives the bias asked for, else a supply of its own."""
    bias, supply = _bias_supply(request), request.conditions.supply
    if request.bias is not None:
        return "bias"
    rails = {supply.negative: "negative", supply.positive: "positive", 0.0: GROUND}
    if request.conditions.input_level > 0:
        rails[request.conditions.input_level] = "level"
    return next((node for volts, node in rails.items() if abs(bias - volts) < 1e-9), "bias")


def _load(request: ReceiverRequest) -> list[Element]:
    parts: list[Element] = []
    if request.load.resistance is not None:
        parts.append(Resistor("RL", "out", GROUND, role="load", fitted=False))
    if request.load.capacitance:
        parts.append(Capacitor("CL", "out", GROUND, role="load", fitted=False))
    return parts


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Strays, load, bias supply; the offset of the op amp with either sign."""
    conditions, load = request.conditions, request.load
    chip = CHIP_RESISTORS[request.preferred.resistors.size]
    offset = request.amplifier.offset_voltage
    bias = _bias_supply(request)
    tolerance = conditions.supply.tolerance if request.bias is None else request.bias.tolerance
    spread = abs(bias) * tolerance if _bias_node(request) == "bias" else 0.0
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
    node = _bias_node(request)
    far_end = level if node == "level" else values.get(f"supply.{node}", values["supply.bias"])
    reverse_bias = POLARITY[request.detector.output] * (level - far_end)
    biased: dict[str, float | Lanes] = {**values, "input_level": level, "supply.bias": far_end, "detector.reverse_bias": reverse_bias}
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


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """Most light and dark current through the feedback; the supplies across the bypass."""
    photocurrent = values["D1.responsivity"] * values["signal.power"] * level_factor(request)
    current = photocurrent + values["signal.ambient"] + values["D1.dark_current"]
    positive, negative = values["supply.positive"], np.abs(values["supply.negative"])
    found = [
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("C1", voltage=current * values["R1"]),
        Stress("D1", voltage=values["detector.reverse_bias"], current=current),
        Stress("U1", voltage=positive + negative),
        Stress("C8", voltage=positive),
        Stress("C9", voltage=negative),
    ]
    if "R2" in values:
        through = positive / (values["R2"] + values["R3"])
        found += [
            Stress("R2", power=through**2 * values["R2"], voltage=through * values["R2"], current=through),
            Stress("R3", power=through**2 * values["R3"], voltage=through * values["R3"], current=through),
            Stress("C2", voltage=values["input_level"]),
        ]
    return tuple(found)


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """The op amp, where its sheet says what it is heated by: supply current, and the load driven from the rail."""
    amplifier = request.amplifier
    span = values["supply.positive"] - values["supply.negative"]
    power = span * values["U1.quiescent_current"]
    if request.load.resistance is not None:
        half = span / 2
        power = power + half**2 / request.load.resistance / 4  # worst where the output rests at half its rail
    if amplifier.junction_to_ambient is None:
        return ()
    rise = power * amplifier.junction_to_ambient.high
    return (Heat("U1", power, values["temperature"] + rise, amplifier.junction_max),)


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """R1 from swing, bandwidth or noise; C1 in its window; the level's divider; bypass."""
    return tia_sizing.propose(request, derivation, bench)


CIRCUIT = Circuit(
    name="tia",
    title="transimpedance amplifier, resistive feedback",
    request=ReceiverRequest,
    topology=topology,
    offers=OFFERS,
    given=given,
    propose=propose,
    bias=bias,
    figures=figures,
    implied=implied,
    stresses=stresses,
    heat=heat,
    faults=tia_faults.faults,
    outcome=tia_faults.outcome,
    levers=("U1.gain_bandwidth", "D1.capacitance", "U1.voltage_noise", "U1.current_noise", "R1"),
    remarks=tia_sizing.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
    ),
    formulas=tia_sizing.FORMULAS,
    starter=STARTER,
    input_capacitance=tia_window.input_capacitance,
)
