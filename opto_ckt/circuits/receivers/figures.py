"""Figures that every receiver offers, from its network functions and the light on its detector."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuits.receivers.detector import level_factor, noise_band, noise_frequency
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import ReceiverRequest


class ReceiverFigures:
    """Each figure as a property, computed when it is first asked for.

    Parameters
    ----------
    values : of every lane, after bias.
    evaluation : of the network at these values.
    request : the design.
    headroom : from the resting output to its limit in the direction of the signal. [V]
    dark_shift : of the output by dark current and offset, in the direction of the signal. [V]
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
        detector: str = "D1",
    ) -> None:
        self._evaluation = evaluation
        self._request = request
        self._headroom = headroom
        self._dark_shift = dark_shift
        self._signal_shot = f"{detector} signal shot"
        self._responsivity = values[f"{detector}.responsivity"]
        self._ambient = values[f"{detector}.ambient_current"]
        self._one_level = values["signal.power"] * level_factor(request)

    @cached_property
    def transimpedance(self) -> Lanes:
        """Output voltage over photocurrent at DC. [V/A]"""
        return np.abs(response.dc_gain(self._evaluation)) / self._responsivity

    @cached_property
    def bandwidth(self) -> Lanes:
        """Half-power frequency, light to output. [Hz]"""
        return response.bandwidth(self._evaluation)

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC. [dB]"""
        return response.peaking(self._evaluation)

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
        return response.rise_time(self._evaluation)

    @cached_property
    def overshoot(self) -> Lanes:
        """Of a step of light, as a share of it. [1]"""
        return response.overshoot(self._evaluation)

    @cached_property
    def output_swing(self) -> Lanes:
        """From the dark level to the one level with ambient light and overshoot. [V]"""
        return (self._responsivity * self._one_level + self._ambient) * self._peak_gain

    @cached_property
    def overload(self) -> Lanes:
        """Average power at which the one level reaches the limit of the output. [W]"""
        left = (self._headroom - self._dark_shift) / self._peak_gain - self._ambient
        return np.asarray(np.maximum(left, 0.0) / (self._responsivity * level_factor(self._request)))

    @cached_property
    def output_noise(self) -> Lanes:
        """Root mean square in the noise band, signal at its typical power. [V]"""
        return np.asarray(np.sqrt(sum(value**2 for value in self._rms.values())))

    @cached_property
    def nep_density(self) -> Lanes:
        """Noise-equivalent power at the noise frequency, dark and ambient light only. [W/√Hz]"""
        frequency = noise_frequency(self._request)
        density = noise.density_by_generator(self._evaluation, frequency)
        dark = sum(power for label, power in density.items() if label != self._signal_shot)
        return np.asarray(np.sqrt(dark) / np.abs(response.transfer_at(self._evaluation, frequency)))

    @cached_property
    def input_noise_density(self) -> Lanes:
        """Noise at the noise frequency as a current of the detector. [A/√Hz]"""
        return self.nep_density * self._responsivity

    @cached_property
    def nep_band(self) -> Lanes:
        """Noise-equivalent power of the whole noise band, dark and ambient light only. [W]"""
        dark = sum(value**2 for label, value in self._rms.items() if label != self._signal_shot)
        return np.asarray(np.sqrt(dark) / (self.transimpedance * self._responsivity))

    @cached_property
    def _rms(self) -> dict[str, Lanes]:
        return noise.rms_by_generator(self._evaluation, noise_band(self._request))

    @cached_property
    def _peak_gain(self) -> Lanes:
        return self.transimpedance * (1 + self.overshoot)


OFFERS = tuple(
    name
    for name, entry in vars(ReceiverFigures).items()
    if isinstance(entry, cached_property) and not name.startswith("_")
)
"""Names of the figures above."""
