"""What the constant-current laser driver leaves of its lowest supply where laser and transistor need most."""

from __future__ import annotations

from typing import Literal, NamedTuple

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.laser import Most, forward
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas import driver
from opto_ckt.limits import Limit
from opto_ckt.request import LaserDriverRequest

GATE = 100.0  #: between op amp and gate or base, common practice [Ω]
LEAST_SERIES = 1.0  #: R7 where nothing asks for one: a place to measure the current at [Ω]
STEP = 1.025  #: from one E96 value to the next


class Slack(NamedTuple):
    """Supply left over at the worst corner: on the way of the current, and of the op amp's drive. [V]"""

    path: float
    drive: float


def current_spread(request: LaserDriverRequest, bench: Bench) -> float:
    """Spread of the current by reference, sense resistor and the divider's two, all against it; offset apart. [1]"""
    return bench.high("U2.voltage") / bench.nominal("U2.voltage") - 1 + 3 * resistor_spread(request)


def offset_error(request: LaserDriverRequest, bench: Bench) -> float:
    """Largest offset of the op amp with its drift. [V]"""
    temperature = request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    drift = bench.high("U1.offset_drift") if "U1.offset_drift" in bench.limits else 0.0
    return bench.high("U1.offset_voltage") + drift * farthest


def ends(bench: Bench, level: Literal["low", "high"]) -> dict[str, float]:
    """Every limit at its low or its high end."""
    return {name: getattr(limit, level) for name, limit in bench.limits.items() if isinstance(limit, Limit)}


class Sharing:
    """The budget at the lowest supply, laser and transistor where they need most."""

    def __init__(self, request: LaserDriverRequest, bench: Bench, most: Most) -> None:
        self.request, self.bench, self.most = request, bench, most
        low, high = ends(bench, "low"), ends(bench, "high")
        weak = ("Q1.transconductance", "Q1.current_gain")
        self.transistor = high | {name: low[name] for name in weak if name in low}
        self.low, self.high = low, high
        required = request.require.get("compliance_margin")
        self.margin = 0.0 if required is None else required.min or 0.0
        self.spread = current_spread(request, bench)

    def laser_voltage(self, level: Literal["low", "high"], current: float) -> float:
        """Forward voltage at a current, of the laser that has least or most of it. [V]"""
        return float(forward(getattr(self, level), self.request, current).at(current))

    def least_series(self, scale: float) -> float:
        """R7 before rounding, its tolerance in it, at a supply so many times that of the design. [Ω]"""
        fixed = self.request.fixed.get("R7")
        if fixed is not None:
            return fixed
        exact = driver.fail_safe_resistance(
            supply=self.high["supply.positive"] * scale,
            forward_voltage=self.laser_voltage("low", self.most.current),
            current_limit=self.most.current,
            on_resistance=0.0,
        )
        return max(float(exact) / (1 - resistor_spread(self.request)), LEAST_SERIES)

    def slack(self, worst: float, sense: float, scale: float = 1.0) -> Slack:
        """What is left over with so much sense voltage, at a supply so many times that of the design."""
        model, values = pass_transistor(self.request.transistor), self.transistor
        rail = self.low["supply.positive"] * scale - worst * self.high["L1.resistance"]
        most_sense = sense * (1 + self.spread) + self.high["U1.offset_voltage"]
        if side_of(self.request) == "low":
            drive = rail - self.high["U1.swing_to_positive"]
        else:
            drive = rail - self.high["U1.swing_to_negative"] + abs(self.high["supply.negative"])
        drop = float(model.control_current(values, np.asarray(worst))) * self.request.fixed.get("R5", GATE)
        left = drive - drop - most_sense
        across = float(model.least_across(values, np.asarray(worst), np.asarray(left)))
        series = self.least_series(scale) * STEP * (1 + resistor_spread(self.request))
        return Slack(
            path=rail - self.laser_voltage("high", worst) - worst * series - most_sense - across,
            drive=left - float(model.control_voltage(values, np.asarray(worst), np.asarray(np.inf))),
        )
