"""Figures that the switched LED offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers import led_figures
from opto_ckt.circuits.drivers.led import RISE
from opto_ckt.circuits.drivers.led_figures import LedFigures
from opto_ckt.circuits.drivers.led_switch import limits
from opto_ckt.formulas.switching import sweep_out_time
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LedSwitchRequest


class LedSwitchFigures(LedFigures):
    """Those of every LED driver, and those of the switch."""

    @cached_property
    def extinction_ratio(self) -> Lanes:
        """Light while on over light while off; infinite without a pre-bias, which leaves none. [1]"""
        lit = np.asarray(self._values["D1.emitted_power"])
        off = np.asarray(self._values.get("off.power", 0.0))
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(off > 0, lit / off, np.inf)

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC. [dB]"""
        return response.peaking(self._evaluation)

    @cached_property
    def peak_current(self) -> Lanes:
        """First current of a step, peaked. [A]"""
        return np.asarray(self._values["peak_current"])

    @cached_property
    def overdrive(self) -> Lanes:
        """How well base or gate are driven. [1]"""
        return np.asarray(self._values["overdrive"])

    @cached_property
    def turn_off_time(self) -> Lanes:
        """Storage of the transistor; then the carriers, swept out or left to their lifetime. [s]"""
        values = self._values
        lifetime, current = np.asarray(values["D1.lifetime"]), np.maximum(self.current, 1e-12)
        if "R5" in values:
            drawn = np.asarray(values["D1.forward_voltage"]) / values["R5"]
            dying = sweep_out_time(lifetime=lifetime, current=current, sweep_current=np.maximum(drawn, 1e-15))
        else:
            dying = RISE * lifetime
        return np.asarray(values["storage"] + dying)

    @cached_property
    def dissipation(self) -> Lanes:
        """Taken from the supply and through the logic output, while lit. [W]"""
        values = self._values
        return np.asarray(values["supply.positive"] * values["loop.current"] + values["U1.high"] * values["U1.current"])


OFFERS = tuple(
    name
    for kind in (LedFigures, LedSwitchFigures)
    for name, entry in vars(kind).items()
    if isinstance(entry, cached_property)
)


def figures(values: Values, evaluation: Evaluation, request: LedSwitchRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LedSwitchFigures(values, evaluation, request), OFFERS)


def implied(request: LedSwitchRequest) -> tuple[Requirement, ...]:
    """What every LED needs, and what LED and switch bear."""
    return (*led_figures.implied(request), *limits.bounds(request))
