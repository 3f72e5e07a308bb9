"""The way of the pulse: capacitor, inductance, resistance, and the voltage that drives it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.formulas import discharge, discharge_shape
from opto_ckt.limits import Lanes


class Loop(NamedTuple):
    """The way of the pulse."""

    capacitance: Lanes  #: [F]
    inductance: Lanes  #: [H]
    resistance: Lanes  #: laser's series resistance in it [Ω]
    voltage: Lanes  #: of the charged capacitor less the laser's turn-on voltage [V]

    @property
    def impedance(self) -> Lanes:
        """√(L/C). [Ω]"""
        return np.asarray(np.sqrt(self.inductance / self.capacitance))

    @property
    def unit(self) -> Lanes:
        """√(LC), in which times of the shape count. [s]"""
        return np.asarray(np.sqrt(self.inductance * self.capacitance))

    @property
    def damping(self) -> Lanes:
        """ζ. [1]"""
        found = discharge.damping_ratio(
            resistance=self.resistance, inductance=self.inductance, capacitance=self.capacitance
        )
        return np.asarray(found)

    @property
    def peak(self) -> Lanes:
        """Greatest current, at any damping. [A]"""
        return np.asarray(self.voltage / self.impedance * discharge_shape.peak(damping=self.damping))

    @property
    def end_voltage(self) -> Lanes:
        """Voltage left the other way round when the current is back at zero, over what drove it. [1]"""
        return np.asarray(discharge_shape.end_voltage(damping=self.damping))
