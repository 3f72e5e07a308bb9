"""Figures that the constant-current laser driver offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers import intensity, runaway
from opto_ckt.circuits.drivers.laser import asked_current, junction_limit
from opto_ckt.circuits.drivers.laser_figures import LaserFigures, offered
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.formulas.reference import parallel_resistance, soft_start_time
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LaserDriverRequest

SETTLED = 0.95  #: of the current, at the end of the soft start
NOISE_FREQUENCY = 10e3  #: where densities are stated; common practice, above most 1/f noise [Hz]
NOISE_BAND = (10.0, 10e6)  #: over which noise is summed, common practice [Hz]


class LaserCurrentFigures(LaserFigures):
    """Each figure as a property, computed when it is first asked for."""

    @cached_property
    def current(self) -> Lanes:
        """Through the laser. [A]"""
        return np.asarray(self._values["D1.current"])

    @cached_property
    def current_error(self) -> Lanes:
        """Distance from the current asked for, as a share of it. [1]"""
        return np.abs(self.current / asked_current(self._request) - 1)

    @cached_property
    def optical_power(self) -> Lanes:
        """At the plane asked for; nothing is trimmed. [W]"""
        return np.asarray(self._values["D1.optical_power"])

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Supply left over at the current that is regulated to. [V]"""
        return np.asarray(self._values["compliance_margin"])

    @cached_property
    def loop_bandwidth(self) -> Lanes:
        """Half-power frequency of the current over the set voltage. [Hz]"""
        return response.bandwidth(self._evaluation)

    @cached_property
    def phase_margin(self) -> Lanes:
        """Of the op amp's loop. [°]"""
        return stability.phase_margin(self._evaluation)

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC. [dB]"""
        return response.peaking(self._evaluation)

    @cached_property
    def overshoot(self) -> Lanes:
        """Of a step of the set voltage, as a share of it. [1]"""
        return response.overshoot(self._evaluation)

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a small step of the set voltage; the soft start's time apart. [s]"""
        return response.rise_time(self._evaluation)

    @cached_property
    def startup_time(self) -> Lanes:
        """Soft start to 95 % of the current. [s]"""
        values = self._values
        return np.asarray(
            soft_start_time(
                resistance=parallel_resistance(first=values["R2"], second=values["R3"]),
                capacitance=values["C2"],
                fraction=SETTLED,
            )
        )

    @cached_property
    def runaway_factor(self) -> Lanes:
        """Loop gain of self-heating if the light were held; at constant current 1 is the peak of the light. [1]"""
        return runaway.factor(self._values, self._request)

    @cached_property
    def driver_intensity_noise(self) -> Lanes:
        """By the current's noise, op amp, reference and resistors in it. [dB/Hz]"""
        share = pass_transistor(self._request.transistor).share(self._values)
        noisy = intensity.current_noise(self._values, self._evaluation, noise_frequency(self._request), share)
        return intensity.driver_noise(noisy, self._values)

    @cached_property
    def laser_intensity_noise(self) -> Lanes:
        """By the laser's sheet; nan where it states none. [dB/Hz]"""
        return intensity.laser_noise(self._values)

    @cached_property
    def shot_intensity_noise(self) -> Lanes:
        """Of all the light at the plane asked for. [dB/Hz]"""
        return intensity.shot_floor(self._values, self._request)

    @cached_property
    def dissipation(self) -> Lanes:
        """Total taken from the supply. [W]"""
        return np.asarray(self._values["supply.positive"] * self._values["supply.current"])

    @cached_property
    def junction_temperature(self) -> Lanes:
        """Of the laser. [K]"""
        return np.asarray(self._values["D1.junction_temperature"])


OFFERS = offered(LaserCurrentFigures)


def figures(values: Values, evaluation: Evaluation, request: LaserDriverRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LaserCurrentFigures(values, evaluation, request), OFFERS)


def implied(request: LaserDriverRequest) -> tuple[Requirement, ...]:
    """The loop keeps control; the laser stays within its sheet; a current asked for with limits keeps them."""
    data, current = request.source, request.signal.current
    bounds = [
        Requirement("compliance_margin", "min", 0.0, 0.1),
        Requirement("current", "max", data.current_max, data.current_max),
        Requirement("junction_temperature", "max", junction_limit(request), 10.0),
    ]
    if (request.signal.plane or data.plane) == data.plane:
        bounds.append(Requirement("optical_power", "max", data.power_max, data.power_max))
    if current is not None and current.min is not None:
        bounds.append(Requirement("current", "min", current.min, current.min))
    if current is not None and current.max is not None:
        bounds.append(Requirement("current", "max", current.max, current.max))
    return tuple(bounds)


def noise_frequency(request: LaserDriverRequest) -> float:
    """Where densities are stated. [Hz]"""
    return NOISE_FREQUENCY


def noise_band(request: LaserDriverRequest) -> tuple[float, float]:
    """Band over which noise is summed. [Hz]"""
    return NOISE_BAND
