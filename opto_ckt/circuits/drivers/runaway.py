"""Self-heating of a laser: the gain of its loop at constant light, and how far the surroundings are from where it is 1.

Thresholds and slopes of the laser at 25 °C stand in the values as ``D1.threshold_current.room`` and
``D1.slope_efficiency.room``.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.laser import forward, thermal_resistance
from opto_ckt.formulas.formula import Real
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest

STEP = 1e-3  #: of the junction temperature, for the slopes of the laser's laws [K]
HOTTEST = 573.15  #: junction up to which a runaway is looked for, far beyond what any laser stands [K]
HALVINGS = 40  #: of the span that it is looked for in


class SelfHeating(NamedTuple):
    """A laser at constant light, with the straight line of its voltage."""

    resistance: Lanes  #: thermal, junction to surroundings [K/W]
    turn_on: Real  #: [V]
    series: Real  #: [Ω]
    power: Lanes  #: [W]
    values: Values
    request: LaserDriverRequest

    def current(self, junction: Lanes) -> Lanes:
        """Current that makes the light at a junction temperature. [A]"""
        data = self.request.source
        slope = data.slope_at(junction, self.values["D1.slope_efficiency.room"])
        with np.errstate(divide="ignore", invalid="ignore"):
            needed = np.where(self.power > 0, self.power / slope, 0.0)
        return np.asarray(data.threshold_at(junction, self.values["D1.threshold_current.room"]) + needed)

    def factor(self, junction: Lanes, current: Lanes) -> Lanes:
        """Rise of the junction by its own heat, for one kelvin of rise. [1]"""
        with np.errstate(over="ignore", invalid="ignore"):
            rising = (self.current(junction + STEP) - self.current(junction - STEP)) / (2 * STEP)
            found = self.resistance * (self.turn_on + 2 * self.series * current) * rising
        return np.where(np.isnan(found), np.inf, found)

    def surroundings(self, junction: Lanes) -> Lanes:
        """Temperature of the surroundings that the junction temperature belongs to. [K]"""
        current = self.current(junction)
        heat = current * (self.turn_on + self.series * current) - self.power
        return np.asarray(junction - self.resistance * heat)


def factor(values: Values, request: LaserDriverRequest) -> Lanes:
    """Loop gain of self-heating at the light that there is, whatever the laser's laws. [1]"""
    return _heating(values, request).factor(_junction(values), np.asarray(values["D1.current"]))


def margin(values: Values, request: LaserDriverRequest) -> Lanes:
    """How much warmer the surroundings may get until no current holds the light there is. [K]

    Negative past the peak of the light, none without light; up to a junction at `HOTTEST` it is looked for.
    """
    heating, junction = _heating(values, request), _junction(values)
    now = heating.factor(junction, np.asarray(values["D1.current"]))
    low, high = np.full_like(junction, STEP + 150.0), np.full_like(junction, HOTTEST)
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        stable = heating.factor(middle, heating.current(middle)) < 1
        low, high = np.where(stable, middle, low), np.where(stable, high, middle)
    distance = heating.surroundings(low) - values["temperature"]
    return np.asarray(np.where(heating.power > 0, np.where(now < 1, distance, -distance), 0.0))


def _junction(values: Values) -> Lanes:
    return np.asarray(np.broadcast_arrays(values["D1.junction_temperature"], values["D1.current"])[0], dtype=float)


def _heating(values: Values, request: LaserDriverRequest) -> SelfHeating:
    line = forward(values, request, np.asarray(values["D1.current"]))
    return SelfHeating(
        np.asarray(thermal_resistance(values, request)),
        line.turn_on,
        line.resistance,
        np.asarray(values["D1.power"]),
        values,
        request,
    )
