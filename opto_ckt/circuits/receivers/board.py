"""What surrounds the amplifier on the board of any receiver: rails with their bypass, level, load and strays."""

from __future__ import annotations

from collections.abc import Mapping
from math import inf

import numpy as np

from opto_ckt.circuit import Bench, Fitted, Stress
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import reference
from opto_ckt.formulas.formula import Real
from opto_ckt.limits import Limit, Values
from opto_ckt.preferred import CHIP_RESISTORS
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, Capacitor, Element, Point, Resistor, Supply
from opto_ckt.units import write

LEVEL_CURRENT = 100e-6  #: through the level's divider, common practice: far above the input bias current [A]
LEVEL_CORNER = 10.0  #: of the level's filter, common practice: below the band of nearly all signals [Hz]
BYPASS = 100e-9  #: common practice, at each supply pin [F]
SLOTS: Mapping[str, tuple[str, str]] = {
    "gain_stage": ("amp", "raised"),
    "post_filter": ("raised", "filtered"),
    "ac_coupling": ("filtered", "out"),
}
TAPS: Mapping[str, tuple[str, str]] = {"servo": ("amp", "sum"), "decision": ("out", "decided")}
SERVO: Point = (3, -6)  #: where a servo is drawn, below the amplifier
GAP = 0.25  #: on the drawing, that an empty slot takes up
STRAY_SPREAD = 0.2  #: a stray capacitance is taken as known to this share


def negative_node(request: ReceiverRequest) -> str:
    """The negative rail, ground with a single supply."""
    return "negative" if request.conditions.supply.negative else GROUND


def level_node(request: ReceiverRequest) -> str:
    """Where the + input sits: ground, or the level that the board makes of a single supply."""
    return "level" if request.levelled and request.conditions.input_level > 0 else GROUND


def rails(request: ReceiverRequest, x: float) -> tuple[list[Element], list[tuple[Point, str]]]:
    """Supplies and bypass capacitors, drawn from ``x`` on, with their marks."""
    elements: list[Element] = [
        Capacitor("C8", "positive", GROUND, role="bypass", stock="bypass", at=(x, 2.5), to=(x, 0.5)),
        Supply("VP", "positive", value="supply.positive"),
    ]
    marks: list[tuple[Point, str]] = [((x, 2.5), "positive"), ((x, 0.5), GROUND)]
    if negative_node(request) != GROUND:
        elements += [
            Supply("VN", "negative", value="supply.negative"),
            Capacitor("C9", GROUND, "negative", role="bypass", stock="bypass", at=(x + 1.5, 2.5), to=(x + 1.5, 0.5)),
        ]
        marks += [((x + 1.5, 2.5), GROUND), ((x + 1.5, 0.5), "negative")]
    return elements, marks


def level(
    request: ReceiverRequest, x: float
) -> tuple[list[Element], list[tuple[Point, str]], list[tuple[Point, Point]]]:
    """Divider and filter of a single supply's level, drawn from ``x`` on, with marks and wires; nothing otherwise."""
    if level_node(request) == GROUND:
        return [], [], []
    elements: list[Element] = [
        Resistor("R2", "positive", "level", role="level", at=(x, 8), to=(x, 6)),
        Resistor("R3", "level", GROUND, role="level", at=(x, 6), to=(x, 4)),
        Capacitor("C2", "level", GROUND, role="level filter", stock="bypass", at=(x + 1.5, 6), to=(x + 1.5, 4)),
    ]
    marks: list[tuple[Point, str]] = [((x, 8), "positive"), ((x, 4), GROUND), ((x + 1.5, 4), GROUND)]
    marks.append(((x - 0.8, 6), "level"))
    return elements, marks, [((x - 0.8, 6), (x + 1.5, 6))]


def load(request: ReceiverRequest) -> list[Element]:
    """What hangs on the output, undrawn."""
    parts: list[Element] = []
    if request.load.resistance is not None:
        parts.append(Resistor("RL", "out", GROUND, role="load", fitted=False))
    if request.load.capacitance:
        parts.append(Capacitor("CL", "out", GROUND, role="load", fitted=False))
    return parts


def dc_load(values: Values, request: ReceiverRequest) -> Real:
    """What the output drives at DC: the load, through a filter without op amps or none; without end otherwise. [Ω]"""
    post_filter = request.blocks.post_filter
    held = {"ac_coupling", "gain_stage"} & set(request.blocks_asked)
    if request.load.resistance is None or held or (post_filter is not None and post_filter.form == "active"):
        return inf
    path = ("R20", "L20.resistance", "L21.resistance") if post_filter is not None else ()
    return values["RL"] + sum(values.get(name, 0.0) for name in path)


def load_limits(request: ReceiverRequest) -> dict[str, Limit]:
    """Values of the load."""
    limits = {}
    if request.load.resistance is not None:
        limits["RL"] = exactly(request.load.resistance)
    if request.load.capacitance:
        limits["CL"] = exactly(request.load.capacitance)
    return limits


def summing_node_limits(request: ReceiverRequest) -> dict[str, Limit]:
    """Strays of the summing node: CS across the feedback, CB and RB to ground."""
    conditions = request.conditions
    chip = CHIP_RESISTORS[request.preferred.resistors.size]
    return {
        "CS": stray(conditions.feedback_stray + chip.body_capacitance),
        "CB": stray(conditions.board_capacitance),
        "RB": exactly(conditions.leakage_resistance),
    }


def openings(end: Point) -> dict[str, tuple[Point, Point]]:
    """Gaps for the blocks of the output line, one after the other up to its end; what hangs on it hangs at the end."""
    x, y = end
    starts = [x - GAP * (len(SLOTS) - index) for index in range(len(SLOTS))]
    line = {slot: ((start, y), (start + GAP, y)) for slot, start in zip(SLOTS, starts, strict=True)}
    return line | dict.fromkeys(TAPS, (end, end)) | {"servo": (SERVO, SERVO)}


def servo_marks(request: ReceiverRequest, amplifier: Point, summing: Point) -> list[tuple[Point, str]]:
    """Names of the nodes that a servo, drawn apart, is tied to; nothing without one."""
    return [(amplifier, "amp"), (summing, "sum")] if "servo" in request.blocks_asked else []


def line_start(end: Point) -> Point:
    """Where the amplifier's own output line ends and the gaps for blocks begin, given where all of it ends."""
    return (end[0] - GAP * len(SLOTS), end[1])


def exactly(value: float) -> Limit:
    """A value without spread."""
    return Limit(value, value, value)


def stray(value: float) -> Limit:
    """A stray capacitance."""
    return Limit(value, (1 - STRAY_SPREAD) * value, (1 + STRAY_SPREAD) * value, assumed=True)


def level_values(
    request: ReceiverRequest, derivation: Derivation, bench: Bench, current: float = LEVEL_CURRENT
) -> dict[str, float]:
    """Divider and filter that make the level of a single supply; nothing where the + input sits at ground."""
    volts, supply = request.conditions.input_level, bench.nominal("supply.positive")
    if volts <= 0:
        return {}
    lower = request.fixed.get("R3", volts / current)
    derivation.note("R3", f"{write(volts, 'V')} at {write(current, 'A')}, common practice")
    upper = derivation.compute(
        "R2", reference.upper_resistance, reason=f"{write(volts, 'V')} from {write(supply, 'V')}",
        voltage=supply, tap_voltage=volts, lower=lower,
    )  # fmt: skip
    parallel = float(reference.parallel_resistance(first=upper, second=lower))
    filtered = derivation.compute(
        "C2", reference.filter_capacitance, reason=f"corner at {write(LEVEL_CORNER, 'Hz')}: noise, ripple",
        resistance=parallel, corner=LEVEL_CORNER,
    )  # fmt: skip
    values = {"R2": upper, "R3": lower, "C2": filtered}
    return values | {ref: request.fixed[ref] for ref in values if ref in request.fixed}


def surroundings(request: ReceiverRequest, derivation: Derivation, others: Values) -> list[Fitted]:
    """Parts of the level, whose exact values are in ``others``, and the bypass capacitors."""
    resistors, bypass = request.preferred.resistors.series, request.preferred.bypass.series
    parts = []
    for ref in ("R2", "R3", "C2"):
        if ref in others:
            value = float(others[ref])
            series, low = (bypass, value) if ref == "C2" else (resistors, 0.0)
            parts.append(Fitted(ref, value, series, low=low, fixed=ref in request.fixed))
    for ref in ("C8", "C9") if request.conditions.supply.negative else ("C8",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        parts.append(Fitted(ref, value, bypass, low=value, high=value, fixed=ref in request.fixed))
    return parts


def stresses(values: Values) -> list[Stress]:
    """Load on the parts of level and rails."""
    positive, negative = values["supply.positive"], np.abs(values["supply.negative"])
    found = [Stress("C8", voltage=positive), Stress("C9", voltage=negative)]
    if "R2" in values:
        through = positive / (values["R2"] + values["R3"])
        found += [
            Stress("R2", power=through**2 * values["R2"], voltage=through * values["R2"], current=through),
            Stress("R3", power=through**2 * values["R3"], voltage=through * values["R3"], current=through),
            Stress("C2", voltage=values["input_level"]),
        ]
    return found
