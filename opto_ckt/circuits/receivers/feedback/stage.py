"""What R1 and C1 are sized around: the stage without its feedback."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

import numpy as np

from opto_ckt.analyses.corners import SMALL_CAPACITOR
from opto_ckt.circuit import Bench
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import second_order
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import OpAmpReceiverRequest

BUILDABLE = 0.2e-12  #: a fitted capacitor below this is no more than its own pads [F]
LARGEST_CHIP = 10e6  #: of the usual series of chip resistors; common practice [Ω]
QUALITY: Mapping[str, float] = {"flat": 0.5**0.5, "bessel": 3**-0.5, "critical": 0.5}
"""Q of a second-order response by its name."""


def _resistor(resistance: float | Lanes) -> Values:
    return {"R1": resistance}


def _capacitor(capacitance: float | Lanes) -> Values:
    return {"C1": capacitance}


@dataclass(frozen=True)
class Stage:
    """An inverting amplifier whose feedback resistance and capacitance are wanted."""

    request: OpAmpReceiverRequest
    derivation: Derivation
    bench: Bench
    capacitance: Mapping[str, float]  #: of the summing node without the feedback, itemised, nominal [F]
    others: Mapping[str, float] = field(default_factory=dict)  #: exact values of the parts that are sized already
    other_noise: float = 0.0  #: of parts beside detector and amplifier, as a current of the detector [A/√Hz]
    standing: float = 0.0  #: most steady current through the feedback that is not light [A]
    decides: tuple[str, ...] = ()  #: limits that make the corners of C1, besides those of op amp and detector
    resistors: Callable[[float | Lanes], Values] = _resistor  #: what is fitted for a feedback resistance
    capacitors: Callable[[float | Lanes], Values] = _capacitor  #: what is fitted for a feedback capacitance
    spread: float | None = None  #: of that capacitance, where it is not one part of the preferred tolerance
    smallest: float = BUILDABLE  #: capacitance that can be built [F]
    both_ways: bool = False  #: light of a second detector drives the output the other way

    @property
    def input_capacitance(self) -> float:
        """Of the summing node, all items together. [F]"""
        return sum(self.capacitance.values())

    @property
    def quality(self) -> float:
        """Q that the response asked for has; maximally flat where neither a name nor a bound says otherwise."""
        request = self.request
        if request.target.response is not None:
            return QUALITY[request.target.response]
        peaking = request.require.get("peaking")
        if peaking is not None and peaking.max:
            return float(second_order.quality_for_peaking(peaking=peaking.max / 2))
        return QUALITY["flat"]

    def fixed(self, ref: str) -> float | None:
        """The value that the engineer insists on, noted as the reason of the part."""
        value = self.request.fixed.get(ref)
        if value is not None:
            self.derivation.note(ref, "fixed in the design file")
        return value


def summing_node(request: OpAmpReceiverRequest, bench: Bench) -> dict[str, float]:
    """Capacitance of the summing node by where it comes from, nominal. [F]"""
    capacitance = bench.nominal("D1.capacitance")
    return {
        "D1 at its bias": float(request.detector.capacitance_at(request.detector.resting_bias, capacitance)),
        "U1 common mode": bench.nominal("U1.common_capacitance"),
        "U1 differential": bench.nominal("U1.differential_capacitance"),
        "board": bench.nominal("CB"),
    }


def part_tolerance(stage: Stage, fitted: Lanes) -> Lanes:
    """By how much what is fitted as feedback capacitance may differ from nominal. [F]"""
    stock, part = stage.request.preferred.capacitors, np.maximum(fitted, 0.0)
    if stage.spread is not None:
        return np.asarray(stage.spread * part)
    tolerance = np.where(part < SMALL_CAPACITOR, stock.tolerance_below_10pF, stock.tolerance * part)
    return np.asarray(np.minimum(tolerance, part))
