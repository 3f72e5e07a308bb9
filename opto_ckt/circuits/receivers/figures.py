"""Figures that every receiver offers, from its network functions and the light on its detector."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cached_property

import numpy as np

from opto_ckt.analyses import eye, noise, response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuits.receivers.detector import (
    decision_band,
    level_factor,
    midband,
    noise_band,
    noise_frequency,
)
from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas import decision
from opto_ckt.formulas.front_end import droop
from opto_ckt.formulas.photodiode import photon_energy
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import ReceiverRequest


class ReceiverFigures:
    """Each figure as a property, computed when it is first asked for; nan where it has no meaning for the request.

    Parameters
    ----------
    values : of every lane, after bias.
    evaluation : of the network at these values.
    request : the design.
    headroom : from the resting output of the amplifier to its limit in the direction of the signal. [V]
    dark_shift : of that output by dark current and offset, in the direction of the signal. [V]
    stage_gain : of light's current to that output, standing light included; that to the last node if None. [V/A]
    detector : designator of the photodiode.
    """

    def __init__(
        self,
        values: Values,
        evaluation: Evaluation,
        request: ReceiverRequest,
        *,
        headroom: float | Lanes,
        dark_shift: float | Lanes,
        stage_gain: float | Lanes | None = None,
        detector: str = "D1",
    ) -> None:
        self._values = values
        self._evaluation = evaluation
        self._request = request
        self._headroom = headroom
        self._dark_shift = dark_shift
        self._stage_gain = stage_gain
        self._detector = detector
        self._responsivity = values[f"{detector}.responsivity"]
        self._ambient = values[f"{detector}.ambient_current"]
        self._one_level = values["signal.power"] * level_factor(request)

    @cached_property
    def transimpedance(self) -> Lanes:
        """Output voltage over photocurrent, at DC or in midband. [V/A]"""
        gain = response.dc_gain(self._evaluation) if self._reference is None else self._reference
        return np.abs(gain) / self._responsivity

    @cached_property
    def bandwidth(self) -> Lanes:
        """Half-power frequency, light to output. [Hz]"""
        return response.bandwidth(self._evaluation, self._reference)

    @cached_property
    def low_cutoff(self) -> Lanes:
        """Half-power frequency below midband; nan of a receiver that passes DC. [Hz]"""
        if self._reference is None:
            return np.full(self._evaluation.lanes, np.nan)
        return response.low_cutoff(self._evaluation, self._reference)

    @cached_property
    def droop(self) -> Lanes:
        """Share of a level lost by the end of the longest run of equal bits; nan of a receiver that passes DC. [1]"""
        signal = self._request.signal
        if signal.bit_rate is None:
            return np.full(self._evaluation.lanes, np.nan)
        return np.asarray(droop(corner=self.low_cutoff, duration=signal.run_length / signal.bit_rate))

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC or in midband. [dB]"""
        return response.peaking(self._evaluation, self._reference)

    @cached_property
    def phase_margin(self) -> Lanes:
        """Of the amplifier's loop. [°]"""
        return stability.phase_margin(self._evaluation)

    @cached_property
    def quality_factor(self) -> Lanes:
        """Largest Q of all pole pairs. [1]"""
        return response.quality_factor(self._evaluation)

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a step of light. [s]"""
        return response.rise_time(self._evaluation, self._reference)

    @cached_property
    def overshoot(self) -> Lanes:
        """Of a step of light, as a share of it. [1]"""
        return response.overshoot(self._evaluation, self._reference)

    @cached_property
    def eye_opening(self) -> Lanes:
        """Least one over greatest zero at the best instant, as a share of the full step. [1]"""
        bit_rate = self._request.signal.bit_rate
        if bit_rate is None:
            return np.full(self._evaluation.lanes, np.nan)
        return eye.opening(self._evaluation, 1 / bit_rate, self._request.signal.run_length, self._reference)

    @cached_property
    def eye_penalty(self) -> Lanes:
        """Light to add for the eye's closure, optical; infinite where it is shut. [dB]"""
        opened = self.eye_opening
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(opened <= 0, np.inf, np.maximum(-10 * np.log10(opened), 0.0))

    @cached_property
    def output_swing(self) -> Lanes:
        """From the dark level to the one level with overshoot, and with ambient light where that passes. [V]"""
        standing = self._ambient if self._reference is None else 0.0
        return (self._responsivity * self._one_level + standing) * self.transimpedance * (1 + self.overshoot)

    @cached_property
    def overload(self) -> Lanes:
        """Average power at which a one reaches the limit of an amplifier, or its average that of a servo. [W]"""
        gain = self.transimpedance if self._stage_gain is None else self._stage_gain
        reach = (self._headroom - self._dark_shift) / gain
        if "second.gain" in self._values:
            second, offset = self._values["second.gain"], np.abs(self._values["second.offset"])
            later = self._values["second.headroom"] - second * self._dark_shift - offset
            reach = np.minimum(reach, later / (gain * second))
        left = reach / (1 + self.overshoot) - (0.0 if "servo.range" in self._values else self._ambient)
        found = left / level_factor(self._request)
        if "servo.range" in self._values:
            standing = self._ambient + self._values[f"{self._detector}.dark_current"]
            found = np.minimum(found, self._values["servo.range"] - standing)
        return np.asarray(np.maximum(found, 0.0) / self._responsivity)

    @cached_property
    def output_noise(self) -> Lanes:
        """Root mean square in the noise band, signal at its typical power. [V]"""
        return np.asarray(np.sqrt(sum(value**2 for value in self._rms.values())))

    @cached_property
    def nep_density(self) -> Lanes:
        """Noise-equivalent power at the noise frequency, dark and ambient light only. [W/√Hz]"""
        frequency = noise_frequency(self._request)
        density = noise.density_by_generator(self._evaluation, frequency)
        dark = sum(power for label, power in density.items() if not label.endswith("signal shot"))
        return np.asarray(np.sqrt(dark) / np.abs(response.transfer_at(self._evaluation, frequency)))

    @cached_property
    def input_noise_density(self) -> Lanes:
        """Noise at the noise frequency as a current of the detector. [A/√Hz]"""
        return self.nep_density * self._responsivity

    @cached_property
    def nep_band(self) -> Lanes:
        """Noise-equivalent power of the whole noise band, dark and ambient light only. [W]"""
        return self._without_signal(self._rms) / (self.transimpedance * self._responsivity)

    @cached_property
    def detectivity(self) -> Lanes:
        """Square root of the detector's area over the noise-equivalent power density. [m √Hz/W]"""
        area = self._request.detector.area
        return np.full(self._evaluation.lanes, np.nan) if area is None else area**0.5 / self.nep_density

    @cached_property
    def sensitivity(self) -> Lanes:
        """Average power for the error ratio: best threshold, finite extinction, noise that grows with the level. [W]

        A closing eye counts as a larger Q: the distance of the levels shrinks by the opening, their noise does not.
        """
        signal, values, detector = self._request.signal, self._values, self._detector
        if signal.bit_rate is None:
            return np.full(self._evaluation.lanes, np.nan)
        quality = decision.quality_for_error_ratio(error_ratio=signal.bit_error_ratio)
        gain = values[f"{detector}.gain"]
        with np.errstate(divide="ignore", invalid="ignore"):
            power = decision.sensitivity(
                quality=quality / self.eye_opening,
                responsivity=self._responsivity / gain,
                thermal_noise=self._without_signal(self._decided) / self.transimpedance,
                bandwidth=self._shot_bandwidth,
                extinction_ratio=signal.extinction_ratio,
                gain=gain,
                excess_noise=values[f"{detector}.excess_noise"],
            )
        ratio = signal.extinction_ratio
        power = power * 2 * ratio / (ratio + 1) / level_factor(self._request)  # the one level, at the share of ones
        return np.where(self.eye_opening > 0, power, np.where(np.isnan(self.eye_opening), np.nan, np.inf))

    @cached_property
    def photons_per_bit(self) -> Lanes:
        """Average, at the sensitivity. [1]"""
        signal = self._request.signal
        if signal.bit_rate is None:
            return np.full(self._evaluation.lanes, np.nan)
        return np.asarray(self.sensitivity / (photon_energy(wavelength=signal.wavelength) * signal.bit_rate))

    @cached_property
    def dynamic_range(self) -> Lanes:
        """Overload over sensitivity, optical. [dB]"""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(10 * np.log10(self.overload / self.sensitivity))

    @cached_property
    def _reference(self) -> Lanes | None:
        """Magnitude of the gain in midband where DC does not pass. [V/W]"""
        frequency = midband(self._request)
        return None if frequency is None else np.abs(response.transfer_at(self._evaluation, frequency))

    @cached_property
    def _rms(self) -> dict[str, Lanes]:
        return noise.rms_by_generator(self._evaluation, noise_band(self._request))

    @cached_property
    def _decided(self) -> dict[str, Lanes]:
        """Output noise that a decision meets: in all that passes, whatever band noise is stated in. [V]"""
        whole = decision_band(self._request)
        return self._rms if whole == noise_band(self._request) else noise.rms_by_generator(self._evaluation, whole)

    def _without_signal(self, rms: Mapping[str, Lanes]) -> Lanes:
        """Noise of all generators but the shot noise of the signal's light. [V]"""
        label = self._label("signal shot")
        return np.asarray(np.sqrt(sum(value**2 for name, value in rms.items() if name != label)))

    @cached_property
    def _shot_bandwidth(self) -> Lanes:
        """Noise bandwidth for currents of the detector, from the thermal noise of its shunt. [Hz]"""
        values, shunt = self._values, self._label("shunt")
        density = 4 * BOLTZMANN * values["temperature"] / values[f"{self._detector}.shunt_resistance"]
        return np.asarray((self._decided[shunt] / self.transimpedance) ** 2 / density)

    def _label(self, generator: str) -> str:
        return f"{self._detector} {generator}"


OFFERS = tuple(
    name
    for name, entry in vars(ReceiverFigures).items()
    if isinstance(entry, cached_property) and not name.startswith("_")
)
"""Names of the figures above."""
