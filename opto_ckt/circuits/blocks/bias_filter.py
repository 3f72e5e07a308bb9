"""Decoupled reverse bias: R10 in the way to the detector, C10 across it; above touch voltage a bleed R11.

bias --[R10]--+-- far end of D1
            [C10] [R11]
              0     0
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Block, Fitted, Refusal, Stress
from opto_ckt.circuits.receivers.avalanche import DANGEROUS
from opto_ckt.circuits.receivers.detector import brightest
from opto_ckt.circuits.receivers.feed import bias_limit, bias_node, far_side
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import bias_filter
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.limits import Limits, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, Capacitor, Element, Point, Resistor, Topology
from opto_ckt.units import write

DROOP = 0.05  #: of the bias at most light where no droop is asked for; common practice
CORNER = 1e3  #: of the filter where the supply's ripple is not told; common practice [Hz]
QUIET = 0.3  #: ripple at the output over the noise there that counts as hidden; common practice
MUCH = 100.0  #: the filter's capacitor over the detector's, at least; common practice
LEAST_RESISTANCE, MOST_RESISTANCE = 100.0, 1e6  #: of R10; common practice [Ω]
DISCHARGE = 5.0  #: within which a high bias has to fall; common practice [s]
BLEED_SHARE = 50.0  #: bleed over series resistance, at least


def topology(request: ReceiverRequest) -> Topology:
    """Drawn along the way from the supply to the far end of the detector."""
    up = far_side(request)
    end = -2.0 * up
    elements: list[Element] = [
        Resistor("R10", "in", "out", role="bias filter", at=(0, 0), to=(0, end)),
        Capacitor("C10", "out", GROUND, role="bias filter", stock="bypass", at=(-2, end), to=(-2, end + 2 * up)),
    ]
    wires: list[tuple[Point, Point]] = [((-2, end), (0, end))]
    marks: list[tuple[Point, str]] = [((-2, end + 2 * up), GROUND)]
    if bleeds(request):
        elements.append(Resistor("R11", "out", GROUND, role="bleed", at=(-4, end), to=(-4, end + 2 * up)))
        wires.append(((-4, end), (-2, end)))
        marks.append(((-4, end + 2 * up), GROUND))
    return Topology(
        elements=tuple(elements),
        input="",
        output=("out", GROUND),
        wires=tuple(wires),
        marks=tuple(marks),
        end=(0, end),
    )


def bleeds(request: ReceiverRequest) -> bool:
    """Whether the bias is high enough to ask for a bleed."""
    limit = bias_limit(request)
    return max(abs(limit.low), abs(limit.high)) > DANGEROUS


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R10 from the droop at the most light, C10 from the ripple that may reach the output, R11 from the discharge."""
    asked, most = request.blocks.bias_filter, brightest(request, bench)
    bias = request.detector.resting_bias
    droop = DROOP * bias if asked is None or asked.droop is None else asked.droop
    average = most["D1.responsivity"] * most["signal.power"] + most["D1.ambient_current"] + most["D1.dark_current"]
    wanted = derivation.compute(
        "droop of the bias", bias_filter.resistance_for_droop,
        reason=f"{write(droop, 'V')} at {write(average, 'A')}, most light on average, ambient and dark current",
        droop=droop, current=average,
    )  # fmt: skip
    resistance = request.fixed.get("R10", min(max(wanted, LEAST_RESISTANCE), MOST_RESISTANCE))
    between = f"between {write(LEAST_RESISTANCE, 'Ω')} and {write(MOST_RESISTANCE, 'Ω')}"
    reason = f"{write(wanted, 'Ω')} from a droop of {write(droop, 'V')} at {write(average, 'A')}"
    derivation.note("R10", reason if wanted == resistance else f"{reason}, kept {between}")
    corner, reason = _corner(request, derivation, bench, exact, resistance)
    stock = request.preferred.bypass
    least = MUCH * most["D1.capacitance"]
    capacitance = request.fixed.get("C10") or max(
        derivation.compute("C10", filter_capacitance, reason=reason, resistance=resistance, corner=corner), least
    )
    series = request.preferred.resistors.series
    parts = [
        Fitted("R10", resistance, series, low=resistance / 1.5, high=resistance * 1.02, fixed="R10" in request.fixed),
        Fitted("C10", capacitance, stock.series, low=capacitance, high=5 * capacitance, fixed="C10" in request.fixed),
    ]
    if bleeds(request):
        high = max(abs(bias_limit(request).low), abs(bias_limit(request).high))
        bleed = derivation.compute(
            "R11", bias_filter.bleed_resistance,
            reason=f"{write(high, 'V')} down to {write(DANGEROUS, 'V')} within {write(DISCHARGE, 's')}",
            capacitance=5 * capacitance, voltage=high, safe=DANGEROUS, duration=DISCHARGE,
        )  # fmt: skip
        parts.append(Fitted("R11", request.fixed.get("R11", bleed), series, high=bleed, fixed="R11" in request.fixed))
    return tuple(parts)


def _corner(
    request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values, resistance: float
) -> tuple[float, str]:
    """Corner of the filter and why: ripple hidden in the noise, or common practice where no ripple is told. [Hz]"""
    supply, asked = request.bias, request.blocks.bias_filter
    if asked is not None and asked.corner is not None:
        return asked.corner, "corner as asked for"
    if supply is None or not supply.ripple:
        return CORNER, f"corner at {write(CORNER, 'Hz')}, common practice; bias.ripple would tell"
    neutral = {**exact, "R10": 1.0, "C10": 1e-6, "R11": 1e9}
    figures = bench.evaluate({name: np.array([value]) for name, value in neutral.items()})
    hidden = QUIET * float(figures["output_noise"][0] / figures["transimpedance"][0])
    capacitance = float(request.detector.capacitance_at(request.detector.resting_bias, bench.high("D1.capacitance")))
    corner = derivation.compute(
        "corner of the bias filter", bias_filter.corner_for_ripple,
        reason=f"{QUIET:g} of the noise, {write(hidden, 'A')} at the input",
        current=hidden, ripple=supply.ripple, capacitance=capacitance,
    )  # fmt: skip
    told = f"{write(supply.ripple, 'V')} of ripple stays below {QUIET:g} of the output noise"
    return min(corner, (supply.ripple_frequency or corner) / 3), told


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The whole bias across R10 when the detector shorts, across C10 always."""
    volts = np.abs(values["supply.bias"])
    drop = volts - np.abs(values["node.far"])
    found = [
        Stress("R10", voltage=volts, power=drop**2 / values["R10"]),
        Stress("C10", voltage=volts),
    ]
    if "R11" in values:
        found.append(Stress("R11", voltage=volts, power=volts**2 / values["R11"]))
    return tuple(found)


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """Bias that is left, ripple that reaches the detector, what a short dissipates in R10."""
    resting, left = request.detector.resting_bias, float(np.min(values["detector.reverse_bias"]))
    found = [f"bias at most light {write(left, 'V')} of {write(resting, 'V')}, supply tolerance included"]
    corner = 1 / (2 * np.pi * np.median(values["R10"]) * np.median(values["C10"]))
    if request.bias is not None and request.bias.ripple:
        current = float(
            bias_filter.ripple_current(
                ripple=request.bias.ripple, capacitance=float(np.max(values["D1.capacitance"])), corner=float(corner)
            )
        )
        found.append(f"{write(request.bias.ripple, 'V')} of ripple leaves {write(current, 'A')} at the input")
    burning = float(np.max(np.abs(values["supply.bias"])) ** 2 / np.median(values["R10"]))
    found.append(f"R10 limits a shorted D1 to {write(burning, 'W')} in itself")
    return tuple(found)


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A detector without bias; a droop that takes all of it."""
    asked, bias = request.blocks.bias_filter, request.detector.resting_bias
    where = ("blocks", "bias_filter")
    if bias_node(request) == GROUND or not bias:
        return (Refusal(where, "the detector has no bias to filter: its far end lies at ground; leave it out"),)
    if asked is not None and asked.droop is not None and asked.droop >= bias:
        return (Refusal((*where, "droop"), f"{write(asked.droop, 'V')} is all of the bias of {write(bias, 'V')}"),)
    return ()


BLOCK = Block(
    name="bias_filter",
    topology=topology,
    propose=propose,
    stresses=stresses,
    remarks=remarks,
    refused=refused,
    formulas=(
        bias_filter.resistance_for_droop,
        bias_filter.ripple_current,
        bias_filter.corner_for_ripple,
        bias_filter.bleed_resistance,
        filter_capacitance,
    ),
)
