"""Figures that the LED behind a resistor offers."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers import led_figures
from opto_ckt.circuits.drivers.led_figures import LedFigures, noise_band, noise_frequency
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LedDriverRequest

__all__ = ["OFFERS", "figures", "implied", "noise_band", "noise_frequency"]


class LedResistorFigures(LedFigures):
    """Those of every LED driver, and what this one draws."""

    @cached_property
    def dissipation(self) -> Lanes:
        """Taken from the supply, or from that of the logic output, while lit. [W]"""
        return np.asarray(self._values["set_voltage"] * self._values["loop.current"])


OFFERS = tuple(
    name
    for kind in (LedFigures, LedResistorFigures)
    for name, entry in vars(kind).items()
    if isinstance(entry, cached_property)
)


def figures(values: Values, evaluation: Evaluation, request: LedDriverRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LedResistorFigures(values, evaluation, request), OFFERS)


def implied(request: LedDriverRequest) -> tuple[Requirement, ...]:
    """What every LED needs, and what the logic output can bear."""
    bounds = led_figures.implied(request)
    output = request.logic_output
    if output is None or output.current_max is None:
        return bounds
    return (*bounds, Requirement("current", "max", output.current_max, output.current_max))
