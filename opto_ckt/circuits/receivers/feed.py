"""How the detector is fed: where its far end lies, from which supply, and what bias the way there leaves."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from opto_ckt.circuits.receivers.detector import POLARITY, detected
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.avalanche import gain_follows
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import DOWN, GROUND, UP, Photodiode, Point, Supply

HALVINGS = 60  #: of the interval that holds the bias of an avalanche diode behind a resistance


def bias_supply(request: ReceiverRequest) -> float:
    """Voltage of the diode's far end, without a drop, that gives the reverse bias asked for. [V]"""
    return request.conditions.input_level - POLARITY[request.detector.output] * request.detector.resting_bias


def bias_node(request: ReceiverRequest) -> str:
    """Node that feeds the far end: ground or a rail where that gives the bias asked for, else a supply of its own."""
    bias, supply = bias_supply(request), request.conditions.supply
    if request.bias is not None:
        return "bias"
    rails = {supply.negative: "negative", supply.positive: "positive", 0.0: GROUND}
    if request.levelled and request.conditions.input_level > 0:
        rails[request.conditions.input_level] = "level"
    return next((node for volts, node in rails.items() if abs(bias - volts) < 1e-9), "bias")


def bias_limit(request: ReceiverRequest) -> Limit:
    """Limits of a bias supply of its own. [V]"""
    bias = bias_supply(request)
    tolerance = request.conditions.supply.tolerance if request.bias is None else request.bias.tolerance
    spread = abs(bias) * tolerance if bias_node(request) == "bias" else 0.0
    return Limit(bias, bias - spread, bias + spread)


def photodiode(request: ReceiverRequest, at: Point, far: Point, node: str = "sum") -> Photodiode:
    """D1 between the amplifier, drawn at one point, and node ``far`` of its feed, drawn at another."""
    if request.detector.output == "cathode":
        return Photodiode("D1", anode="far", cathode=node, role="detector", table="detector", at=far, to=at, facing=UP)
    return Photodiode("D1", anode=node, cathode="far", role="detector", table="detector", at=at, to=far, facing=DOWN)


def far_side(request: ReceiverRequest) -> float:
    """Where the far end is drawn: below (-1) where it goes to a lower voltage, above (1) where to a higher one."""
    return -POLARITY[request.detector.output]


def bias_elements(request: ReceiverRequest) -> tuple[Supply, ...]:
    """The supply that feeds the far end, where it has one of its own."""
    return (Supply("VB", "bias", value="supply.bias"),) if bias_node(request) == "bias" else ()


def feed_drawn(request: ReceiverRequest, far: Point) -> tuple[Point, dict[str, tuple[Point, Point]]]:
    """Where the supply of the far end is drawn, and the opening for a filter between the two."""
    if "bias_filter" not in request.blocks_asked:
        return far, {}
    supply = (far[0], far[1] + 2 * far_side(request))
    return supply, {"bias_filter": (supply, far)}


def fed(
    values: Values,
    request: ReceiverRequest,
    level: float | Lanes,
    load: float | Lanes = 0.0,
    series: float | Lanes = 0.0,
) -> dict[str, float | Lanes]:
    """The detector in its feed: reverse bias left at the average light, and all that follows from it.

    Parameters
    ----------
    values : before bias.
    level : voltage of the end that feeds the amplifier, or beyond a load there. [V]
    load : between that level and the detector. [Ω]
    series : of the circuit's own between supply and far end, besides a filter's. [Ω]
    """
    sign = POLARITY[request.detector.output]
    node = bias_node(request)
    here = {"level": level, GROUND: 0.0}
    supply = here[node] if node in here else values[f"supply.{node}"]
    resistance = values.get("R10", 0.0)
    held = 1 / (1 + resistance / values["R11"]) if "R11" in values else 1.0  #: share of the supply that a bleed leaves
    resting, resistance = sign * (level - supply * held), resistance * held + series

    def left(reverse_bias: float | Lanes) -> dict[str, float | Lanes]:
        return detected({**values, "detector.reverse_bias": reverse_bias}, request)

    bias, total = resting, resistance + load
    if np.any(total):
        bias = resting - total * _drawn(values, left(resting))
        if gain_follows(request.detector):
            bias = _settled(values, left, resting, total)
    found = left(bias)
    return {
        "input_level": level,
        "supply.bias": supply,
        "detector.reverse_bias": bias,
        "node.far": level - sign * (bias + load * _drawn(values, found)),
        **found,
    }


def _drawn(values: Values, found: Values) -> float | Lanes:
    """Steady current through the detector. [A]"""
    return found["D1.responsivity"] * values["signal.power"] + found["D1.ambient_current"] + found["D1.dark_current"]


def _settled(
    values: Values, left: Callable[[Lanes], Values], resting: float | Lanes, resistance: float | Lanes
) -> Lanes:
    """Bias at which an avalanche diode draws just the current that leaves it: more bias, more current, by bisection."""
    lanes = np.broadcast_shapes(*(np.shape(value) for value in values.values()))
    low, high = np.zeros(lanes), np.broadcast_to(np.asarray(resting, dtype=float), lanes)
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        short = resting - resistance * _drawn(values, left(middle)) < middle
        low, high = np.where(short, low, middle), np.where(short, middle, high)
    return np.asarray((low + high) / 2)
