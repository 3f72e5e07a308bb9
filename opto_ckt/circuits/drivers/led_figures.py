"""Figures that every LED driver offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuits.drivers.led import asked_current
from opto_ckt.limits import Lanes, Requirement, Values
from opto_ckt.request import LedDriverRequest

NOISE_FREQUENCY = 100e3  #: where densities are stated; common practice, above most 1/f noise [Hz]
NOISE_BAND = (1e3, 10e6)  #: over which noise is summed, common practice [Hz]


class LedFigures:
    """Each figure as a property, computed when it is first asked for."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LedDriverRequest) -> None:
        self._values, self._evaluation, self._request = values, evaluation, request

    @cached_property
    def current(self) -> Lanes:
        """Through the LED while it is lit. [A]"""
        return np.asarray(self._values["D1.current"])

    @cached_property
    def current_error(self) -> Lanes:
        """Distance from the current asked for, as a share of it. [1]"""
        return np.abs(self.current / asked_current(self._request) - 1)

    @cached_property
    def optical_power(self) -> Lanes:
        """While it is lit, at the plane of the sheet. [W]"""
        return np.asarray(self._values["D1.emitted_power"])

    @cached_property
    def bandwidth(self) -> Lanes:
        """Of the light over the driving voltage, -3 dB of the photocurrent. [Hz]"""
        return response.bandwidth(self._evaluation)

    @cached_property
    def optical_bandwidth(self) -> Lanes:
        """Where the modulated light has halved. [Hz]"""
        return response.bandwidth(self._evaluation, np.abs(response.dc_gain(self._evaluation)) / np.sqrt(2))

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a small step of the light. [s]"""
        return response.rise_time(self._evaluation)

    @cached_property
    def junction_temperature(self) -> Lanes:
        """Of the LED. [K]"""
        return np.asarray(self._values["D1.junction_temperature"])


def implied(request: LedDriverRequest) -> tuple[Requirement, ...]:
    """The LED stays within its sheet; a current asked for with limits keeps them."""
    data, current = request.source, request.signal.current
    bounds = [
        Requirement("current", "max", data.current_max, data.current_max),
        Requirement("junction_temperature", "max", data.junction_max, 10.0),
    ]
    if current is not None and current.min is not None:
        bounds.append(Requirement("current", "min", current.min, current.min))
    if current is not None and current.max is not None:
        bounds.append(Requirement("current", "max", current.max, current.max))
    return tuple(bounds)


def noise_frequency(request: LedDriverRequest) -> float:
    """Where densities are stated. [Hz]"""
    return NOISE_FREQUENCY


def noise_band(request: LedDriverRequest) -> tuple[float, float]:
    """Band over which noise is summed. [Hz]"""
    return NOISE_BAND
