"""What the parts of the constant-current laser driver must stand, how warm they get, and what to be careful of."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.drivers.laser import SIDES, safety, side_of
from opto_ckt.formulas.driver import output_current_noise
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

HOT = 333.15  #: a surface that burns when it is touched for some seconds, 60 °C; common practice [K]
COOL_SHARE = 0.8  #: of the way from ambient to its limit, beyond which a part is worth a word


def stresses(values: Values, request: LaserDriverRequest) -> tuple[Stress, ...]:
    """Resistors and transistor with Q1 hard on, where that is worse; capacitors at the whole supply."""
    supply, span = values["supply.positive"], values["supply.span"]
    current = np.maximum(values["Q1.drain_current"], values["hard_on_current"])
    sensed = current + values["Q1.control_current"]
    reference = np.abs(values["node.ref"] - (0.0 if side_of(request) == "low" else values["node.rail"]))
    divider = reference / (values["R2"] + values["R3"])
    feed = values["node.rail"] - reference
    found = [
        _resistor("R1", sensed, values),
        _resistor("R7", current, values),
        _resistor("R2", divider, values),
        _resistor("R3", divider, values),
        Stress("R6", power=feed**2 / values["R6"], voltage=feed, current=feed / values["R6"]),
        Stress("R8", power=supply_drop(values) ** 2 / values["R8"], voltage=supply_drop(values)),
        Stress("R5", voltage=supply, power=values["Q1.control_current"] ** 2 * values["R5"]),
        Stress("R4", voltage=supply),
        Stress("R9", voltage=values["node.rail"] * 0.0 + reference),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=current),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["D1.current"]),
        Stress("U1", power=values["U1.power"], voltage=span, current=values["Q1.control_current"]),
        Stress("U2", power=values["U2.current"] * reference, voltage=reference, current=values["U2.current"]),
        Stress("L1", current=values["supply.current"]),
        Stress("C1", voltage=span),
        Stress("C2", voltage=reference),
        *(Stress(ref, voltage=supply) for ref in ("C3", "C8", "R11", "R12", "Q2", "Q3")),
        Stress("C9", voltage=np.abs(values["supply.negative"])),
        Stress("D2", voltage=supply),
    ]
    return tuple(stress for stress in found if stress.ref[0] not in "RC" or stress.ref in values)


def _resistor(ref: str, current: float | Lanes, values: Values) -> Stress:
    return Stress(ref, power=current**2 * values[ref], voltage=current * values[ref], current=current)


def supply_drop(values: Values) -> float | Lanes:
    """Over the filter, steady. [V]"""
    return values["supply.positive"] - values["node.rail"]


def heat(values: Values, request: LaserDriverRequest) -> tuple[Heat, ...]:
    """The laser's case, the junction of the pass transistor, and of the op amp where its sheet says how warm it gets."""
    found = [
        Heat("D1", values["D1.heat"], values["D1.case_temperature"], request.source.case_max),
        Heat("Q1", values["Q1.power"], transistor_temperature(values), request.transistor.junction_max),
    ]
    amplifier = request.amplifier
    if amplifier.junction_to_ambient is not None:
        warm = values["temperature"] + values["U1.power"] * amplifier.junction_to_ambient.high
        found.append(Heat("U1", values["U1.power"], warm, amplifier.junction_max))
    return tuple(found)


def transistor_temperature(values: Values) -> float | Lanes:
    """Junction of the pass transistor: to the air, or to its case held at the temperature where the sheet has no other. [K]"""
    name = "Q1.junction_to_ambient" if "Q1.junction_to_ambient" in values else "Q1.junction_to_case"
    return values["temperature"] + values["Q1.power"] * values[name]


def remarks(values: Values, limits: Limits, request: LaserDriverRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.power"])))]
    found += _hot(values, request)
    if SIDES[request.source.common] is None:
        found.append("the laser floats: keep its case off ground, or insulate it")
    elif side_of(request) == "low":
        found.append("the laser's case is at the supply: insulate it from whatever it is mounted on")
    if request.diode is None:
        found.append("no diode across the laser: add [diode] to keep reverse voltage from it")
    elif request.source.reverse_voltage_max < (drop := float(request.diode.forward_voltage_at(REVERSE_CURRENT))):
        found.append(
            f"D2 lets {write(drop, 'V')} of reverse voltage stand, the laser takes {write(request.source.reverse_voltage_max, 'V')}"
        )
    found.append("connect the laser before the supply: reconnected live, it takes the current that R7 allows")
    if not request.signal.enable:
        found.append("no disable input: signal.enable = true fits one that keeps the laser off while it is open")
    found += _shut_off(values, request)
    found.append(_noise(values))
    limit = request.amplifier.common_mode_to_negative if side_of(request) == "low" else request.amplifier.common_mode_to_positive
    if limit is None:
        rail = "negative" if side_of(request) == "low" else "positive"
        found.append(f"the amplifier's sheet says nothing of inputs near its {rail} rail: see that they work there")
    if request.signal.power is not None:
        found.append("the power is not trimmed: its span holds the spread of the laser; trim R2, or control the power")
    return tuple(found)


REVERSE_CURRENT = 10e-3  #: through D2 when the laser is probed the wrong way round, common practice [A]


def _hot(values: Values, request: LaserDriverRequest) -> list[str]:
    found = []
    for part in heat(values, request):
        warmest = float(np.max(part.temperature))
        if part.ref == "Q1" and warmest > HOT:
            found.append(f"Q1 gets hot, {write(warmest, '°C')} inside: give it copper, do not touch it")
    return found


def _shut_off(values: Values, request: LaserDriverRequest) -> list[str]:
    """Whether the op amp can take gate or base below its threshold."""
    name = "swing_to_negative" if side_of(request) == "low" else "swing_to_positive"
    rest = float(np.max(values[f"U1.{name}"]))
    least = float(np.min(values.get("Q1.threshold_voltage", values.get("Q1.base_emitter_voltage", np.inf))))
    if rest < least:
        return []
    return [f"U1 rests {write(rest, 'V')} off its rail, Q1 conducts from {write(least, 'V')}: the laser is not fully off"]


def _noise(values: Values) -> str:
    density = float(
        np.max(
            output_current_noise(
                voltage_noise=values["U1.voltage_noise"], sense_resistance=values["R1"], temperature=values["temperature"]
            )
        )
    )
    return f"current noise of the loop {write(density, 'A/√Hz')} below its bandwidth, 1/f noise and the reference's apart"
