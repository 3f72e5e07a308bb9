"""Figures that the power-controlled laser driver offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers import runaway as self_heating
from opto_ckt.circuits.drivers.laser import coupling, junction_limit, settle
from opto_ckt.circuits.drivers.laser_current import figures as current_figures
from opto_ckt.circuits.drivers.laser_figures import LaserFigures, offered
from opto_ckt.circuits.drivers.laser_power import inner
from opto_ckt.circuits.drivers.laser_power.monitor import beside
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas import laser_modulation, power_loop
from opto_ckt.formulas.reference import divided_voltage
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LaserPowerRequest

SETTLED = 0.95  #: of the power, at the end of the start
COMFORTABLE = 0.5  #: largest runaway factor, the limit being 1; common practice
STEADY = 30.0  #: least phase margin of either loop; common practice [°]
LEAST_ZERO = 1e-3  #: zero level, as a share of the average, below which an extinction ratio is not told

noise_frequency = current_figures.noise_frequency
noise_band = current_figures.noise_band


def loop_gain(values: Values, request: LaserPowerRequest) -> Lanes:
    """What a slow change of the integrator's output comes back as from the monitor. [1]"""
    share = pass_transistor(request.transistor).share(values)
    transfer = values["R3"] / (values["R2"] + values["R3"]) * share / values["R1"]
    total = beside(values, np.asarray(values["R14"] + values["RV1.setting"]))
    return np.asarray(values["D1.monitor_gain"] * total * transfer)


def runaway(values: Values, request: LaserPowerRequest) -> Lanes:
    """Loop gain of self-heating at the light that there is; at least 1 where the laser does not settle. [1]"""
    found = self_heating.factor(values, request)
    lost = np.isinf(values["needed_current"]) & (np.asarray(values["D1.power"]) > 0)
    return np.asarray(np.where(lost, np.maximum(found, 1.0), found))


def clamp_light(values: Values, request: LaserPowerRequest) -> Lanes:
    """Light at the current of the clamp, at the plane of the sheet. [W]"""
    room = {name: values[f"{name}.room"] for name in ("D1.threshold_current", "D1.slope_efficiency")}
    return np.asarray(settle({**values, **room}, request, np.asarray(values["clamp_current"])).power)


class LaserPowerFigures(LaserFigures):
    """Each figure as a property, computed when it is first asked for."""

    _request: LaserPowerRequest

    @cached_property
    def optical_power(self) -> Lanes:
        """At the plane asked for, trimmed. [W]"""
        return np.asarray(self._values["D1.optical_power"])

    @cached_property
    def current(self) -> Lanes:
        """Through the laser. [A]"""
        return np.asarray(self._values["D1.current"])

    @cached_property
    def modulation_current(self) -> Lanes:
        """Peak to peak, set on each unit at 25 °C for the extinction ratio asked for; nan where none is. [A]"""
        values, request = self._values, self._request
        signal, data = request.signal, request.source
        if signal.extinction_ratio is None or signal.power is None:
            return np.full_like(self.current, np.nan)
        slope = data.slope_at(ROOM_TEMPERATURE, values["D1.slope_efficiency.room"]) * coupling(values, request)
        return (
            np.asarray(
                laser_modulation.modulation_for_extinction(
                    power=signal.power.nominal,
                    extinction_ratio=signal.extinction_ratio,
                    mark_density=signal.mark_density,
                    slope=slope,
                )
            )
            + 0.0 * self.current
        )

    @cached_property
    def extinction_ratio(self) -> Lanes:
        """With that modulation current held, and the average by the loop; nan where none is asked for. [1]"""
        density, power = self._request.signal.mark_density, self.optical_power
        slope, current = self._values["D1.slope_efficiency"], self.modulation_current
        most = (1 - LEAST_ZERO) * power / (density * slope)
        return np.asarray(
            laser_modulation.extinction_ratio(
                power=power, modulation_current=np.minimum(current, most), mark_density=density, slope=slope
            )
        )

    @cached_property
    def clamp_current(self) -> Lanes:
        """The most that the integrator's swing lets flow. [A]"""
        return np.asarray(self._values["clamp_current"])

    @cached_property
    def clamp_margin(self) -> Lanes:
        """What the clamp leaves beyond the current needed, aged laser and heat in it. [1]"""
        needed = np.asarray(self._values["needed_current"])
        with np.errstate(divide="ignore"):
            return np.asarray(self._values["clamp_current"] / needed - 1)

    @cached_property
    def clamp_power(self) -> Lanes:
        """At the current of the clamp, at the plane of the sheet: an open monitor leads there. [W]"""
        return clamp_light(self._values, self._request)

    @cached_property
    def runaway_factor(self) -> Lanes:
        """Loop gain of self-heating. [1]"""
        return runaway(self._values, self._request)

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Supply left over at the current that the power asks for. [V]"""
        return np.asarray(self._values["compliance_margin"])

    @cached_property
    def loop_bandwidth(self) -> Lanes:
        """Half-power frequency of the light over the set level. [Hz]"""
        return response.bandwidth(self._evaluation)

    @cached_property
    def phase_margin(self) -> Lanes:
        """Of the power loop. [°]"""
        return stability.phase_margin(self._evaluation)

    @cached_property
    def inner_phase_margin(self) -> Lanes:
        """Of the current loop. [°]"""
        return stability.phase_margin(inner.evaluation(self._values, self._request))

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC. [dB]"""
        return response.peaking(self._evaluation)

    @cached_property
    def overshoot(self) -> Lanes:
        """Of a step of the set level, as a share of it. [1]"""
        return response.overshoot(self._evaluation)

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a small step of the set level; the soft start's time apart. [s]"""
        return response.rise_time(self._evaluation)

    @cached_property
    def droop(self) -> Lanes:
        """How far the loop follows the longest run of equal bits; nan without a bit rate. [1]"""
        signal = self._request.signal
        if signal.bit_rate is None:
            return np.full_like(self.current, np.nan)
        run = laser_modulation.run_duration(run_length=signal.run_length, bit_rate=signal.bit_rate)
        crossover = stability.crossover_frequency(self._evaluation)
        return np.asarray(power_loop.loop_droop(bandwidth=crossover, duration=run))

    @cached_property
    def startup_time(self) -> Lanes:
        """To 95 % of the power: level past what R16 holds, integrator slewing in the dark, its loop. [s]"""
        values, request = self._values, self._request
        share = pass_transistor(request.transistor).share(values)
        onset = values["D1.threshold_current"] * values["R1"] / share * (values["R2"] + values["R3"]) / values["R3"]
        soft_start, total = np.asarray(values["R13"] * values["C2"]), np.asarray(values["R14"] + values["RV1.setting"])
        held = divided_voltage(voltage=1.0, upper=values["R16"], lower=total)
        return -soft_start * np.log(1 - held) + power_loop.startup(
            soft_start=soft_start,
            integration=np.asarray(values["R10"] * values["C4"]),
            gain=np.maximum(loop_gain(values, request), 1e-6),
            threshold=np.asarray(onset / np.maximum(values["set_voltage"], 1e-3)),
            fraction=SETTLED,
        )

    @cached_property
    def dissipation(self) -> Lanes:
        """Total taken from the supply. [W]"""
        return np.asarray(self._values["supply.positive"] * self._values["supply.current"])

    @cached_property
    def junction_temperature(self) -> Lanes:
        """Of the laser. [K]"""
        return np.asarray(self._values["D1.junction_temperature"])


OFFERS = offered(LaserPowerFigures)


def figures(values: Values, evaluation: Evaluation, request: LaserPowerRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LaserPowerFigures(values, evaluation, request), OFFERS)


def implied(request: LaserPowerRequest) -> tuple[Requirement, ...]:
    """The loop keeps control, the clamp lets it and no more; the laser stays within its sheet and does not run away."""
    data = request.source
    bounds = [
        Requirement("compliance_margin", "min", 0.0, 0.1),
        Requirement("clamp_margin", "min", 0.0, 0.05),
        Requirement("clamp_current", "max", data.current_max, data.current_max),
        Requirement("clamp_power", "max", data.power_max, data.power_max),
        Requirement("current", "max", data.current_max, data.current_max),
        Requirement("junction_temperature", "max", junction_limit(request), 10.0),
        Requirement("runaway_factor", "max", COMFORTABLE, COMFORTABLE),
        Requirement("phase_margin", "min", STEADY, 45.0),
        Requirement("inner_phase_margin", "min", STEADY, 45.0),
    ]
    if (request.signal.plane or data.plane) == data.plane:
        bounds.append(Requirement("optical_power", "max", data.power_max, data.power_max))
    return tuple(bounds)
