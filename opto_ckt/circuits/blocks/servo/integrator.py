"""What the two forms of the servo share: op amp, time constant, capacitors, heat."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench, Fitted, Heat, Refusal
from opto_ckt.circuits.blocks.cutoff import allowed
from opto_ckt.circuits.receivers.amplifier import either_sign
from opto_ckt.circuits.receivers.board import BYPASS
from opto_ckt.circuits.receivers.detector import brightest
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import front_end
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, Capacitor, Element, Point

WHERE = ("blocks", "servo")
RESISTANCE = 100e3  #: R31: no burden to the amplifier, little offset; common practice [Ω]
LARGEST_CAPACITOR = 1e-6  #: of the integrator, above which the resistors grow; common practice [F]
ROOM = 1.1  #: range of the current over the most that the design has
PASSED = 0.75  #: of a class-2 capacitor's value at its least; common practice


def table(request: ReceiverRequest) -> str:
    """Table of the design file that holds U30."""
    return "amplifier" if request.second_amplifier is None else "second_amplifier"


def data(request: ReceiverRequest) -> OpAmpData:
    """The op amp of the integrator."""
    record = request.second_amplifier or request.amplifier
    if record is None:
        raise ValueError("refused before: no op amp")
    return record


def bypass(rails: Mapping[str, str], x: float) -> tuple[list[Element], list[tuple[Point, str]]]:
    """Capacitors from supply pins to ground, by designator and rail, and what their ends are tied to."""
    elements: list[Element] = []
    marks: list[tuple[Point, str]] = []
    for ref, rail in rails.items():
        upper, lower = (GROUND, rail) if rail == "negative" else (rail, GROUND)
        elements.append(Capacitor(ref, upper, lower, role="bypass", stock="bypass", at=(x, 1), to=(x, -1)))
        marks += [((x, 1), upper), ((x, -1), lower)]
        x += 2
    return elements, marks


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Offset of the integrator with either sign."""
    return either_sign(data(request), "U30")


def wanted_range(request: ReceiverRequest, bench: Bench) -> float:
    """Steady current to take away: as asked for, or all that the design has. [A]"""
    asked, most = request.blocks.servo, brightest(request, bench)
    average = most["D1.responsivity"] * most["signal.power"] + most["D1.ambient_current"] + most["D1.dark_current"]
    return float(ROOM * average if asked is None or asked.range is None else asked.range)


class Integrator(NamedTuple):
    """Its two parts, exact."""

    resistor: Fitted
    capacitor: Fitted


def parts(
    request: ReceiverRequest, derivation: Derivation, bench: Bench, without: Values, injection: float
) -> Integrator:
    """R31 and C32 for the low cut-off, at values `without` the servo and a resistance from its output to the node."""
    stock, fixed = request.preferred.bypass, request.fixed
    corner, reason = allowed(request, request.blocks.servo) or (1.0, "")
    constant = derivation.compute(
        "time constant of the servo", front_end.servo_time_constant, reason=reason,
        feedback_resistance=float(bench.evaluate(without)["transimpedance"][0]),
        injection_resistance=injection, corner=corner,
    )  # fmt: skip
    resistance = fixed.get("R31", max(RESISTANCE, constant / LARGEST_CAPACITOR))
    capacitance = fixed.get("C32") or derivation.compute(
        "C32", filter_capacitance, reason=f"{reason}; tolerance and class 2 taken off",
        resistance=resistance, corner=PASSED * (1 - stock.tolerance) / (2 * np.pi * constant),
    )  # fmt: skip
    derivation.note("R31", "common practice: no burden to the amplifier, little offset")
    series = request.preferred.resistors.series
    return Integrator(
        Fitted("R31", resistance, series, low=resistance / 1.05, high=resistance * 1.05, fixed="R31" in fixed),
        Fitted("C32", capacitance, stock.series, low=capacitance, high=5 * capacitance, fixed="C32" in fixed),
    )


def bypass_parts(request: ReceiverRequest, derivation: Derivation, refs: Iterable[str]) -> tuple[Fitted, ...]:
    """Capacitors at the supply pins."""
    found = []
    for ref in refs:
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        series = request.preferred.bypass.series
        found.append(Fitted(ref, value, series, low=value, high=value, fixed=ref in request.fixed))
    return tuple(found)


def neutral(exact: Values, injection: Values) -> dict[str, Lanes]:
    """Values with the servo as good as not there, by what lets it inject nothing."""
    parts = {"R31": 1e5, "R32": 1e5, "C31": 1e-6, "C32": 1e-6, "C38": BYPASS, "C39": BYPASS}
    return {name: np.array([value]) for name, value in {**exact, **parts, **injection}.items()}


def heat(values: Values, request: ReceiverRequest, supply: float | Lanes) -> tuple[Heat, ...]:
    """U30 on a supply [V], where its sheet says what it is heated by."""
    record = data(request)
    if record.junction_to_ambient is None:
        return ()
    power = supply * values["U30.quiescent_current"]
    return (Heat("U30", power, values["temperature"] + power * record.junction_to_ambient.high, record.junction_max),)


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A band that begins at DC; no op amp."""
    if allowed(request, request.blocks.servo) is None:
        return (Refusal(WHERE, "needs low_cutoff in it, or min under signal.band: this band begins at dc"),)
    if request.amplifier is None and request.second_amplifier is None:
        return (Refusal(WHERE, "needs an op amp: a table [second_amplifier]"),)
    return ()


FORMULAS = (front_end.injection_resistance, front_end.servo_corner, front_end.servo_time_constant, filter_capacitance)
