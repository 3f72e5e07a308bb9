"""Figures that the linear LED driver offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers import led_figures
from opto_ckt.circuits.drivers.led_figures import LedFigures
from opto_ckt.circuits.drivers.led_linear.harmonics import roll_off
from opto_ckt.formulas.led import optical_index, second_harmonic
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LedLinearRequest


class LedLinearFigures(LedFigures):
    """Those of every LED driver, referred to the middle of the band, and those of signal and loop."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LedLinearRequest) -> None:
        super().__init__(values, evaluation, request)
        self._signal = request.signal

    @cached_property
    def _midband(self) -> Lanes:
        """Gain in the middle between the coupling's corner and the upper one, on the scale of frequencies. [W/V]"""
        values, evaluation = self._values, self._evaluation
        source = values["RG"] + parallel_resistance(first=values["R2"], second=values["R3"])
        low = 1 / (2 * np.pi * values["C2"] * source)
        high = response.bandwidth(evaluation, response.midband_gain(evaluation))
        with np.errstate(invalid="ignore"):
            middle = np.nan_to_num(np.sqrt(low * high), nan=1e3, posinf=1e3)
        return np.asarray(np.abs(response.transfer_at(evaluation, middle)))

    @cached_property
    def bandwidth(self) -> Lanes:
        """Of the light over the input, -3 dB of the photocurrent. [Hz]"""
        return response.bandwidth(self._evaluation, self._midband)

    @cached_property
    def optical_bandwidth(self) -> Lanes:
        """Where the modulated light has halved. [Hz]"""
        return response.bandwidth(self._evaluation, self._midband / np.sqrt(2))

    @cached_property
    def low_cutoff(self) -> Lanes:
        """Of the coupling. [Hz]"""
        return response.low_cutoff(self._evaluation, self._midband)

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that of the midband. [dB]"""
        return response.peaking(self._evaluation, self._midband)

    @cached_property
    def phase_margin(self) -> Lanes:
        """Of the op amp's loop. [°]"""
        return stability.phase_margin(self._evaluation)

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a small step at the input, before the coupling takes it back. [s]"""
        return response.rise_time(self._evaluation, self._midband)

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Supply left over at the crest of the signal. [V]"""
        return np.asarray(self._values["compliance_margin"])

    @cached_property
    def peak_current(self) -> Lanes:
        """At the crest of the signal. [A]"""
        return np.asarray(self._values["peak_current"])

    @cached_property
    def _saturation(self) -> float:
        law = roll_off(self._request.source)
        return np.nan if law is None or not np.isfinite(law.saturation_current) else law.saturation_current

    @cached_property
    def optical_index(self) -> Lanes:
        """Peak over standing light: less than the current's where the light rolls off. [1]"""
        index = self._signal.modulation_index
        if np.isnan(self._saturation):
            return np.full_like(self.current, index)
        return np.asarray(
            optical_index(
                amplitude=index * self.current, bias_current=self.current, saturation_current=self._saturation
            )
        )

    @cached_property
    def harmonic_2(self) -> Lanes:
        """Second harmonic of the light at full signal. [dB]"""
        return np.asarray(20 * np.log10(self._ratio))

    @cached_property
    def harmonic_3(self) -> Lanes:
        """Third harmonic of the light at full signal. [dB]"""
        return np.asarray(40 * np.log10(self._ratio))

    @cached_property
    def _ratio(self) -> Lanes:
        """Second harmonic over the fundamental; nan where the sheet gives one point of power alone. [1]"""
        amplitude = self.current * self._signal.modulation_index
        ratio = second_harmonic(amplitude=amplitude, bias_current=self.current, saturation_current=self._saturation)
        return np.asarray(np.abs(ratio))

    @cached_property
    def dissipation(self) -> Lanes:
        """Total taken from the supply. [W]"""
        return np.asarray(self._values["supply.positive"] * self._values["supply.current"])

    @cached_property
    def loop_bandwidth(self) -> Lanes:
        """Light over the input: what the compensation is held against. [Hz]"""
        return self.bandwidth


OFFERS = tuple(
    dict.fromkeys(
        name
        for kind in (LedFigures, LedLinearFigures)
        for name, entry in vars(kind).items()
        if isinstance(entry, cached_property) and not name.startswith("_") and name != "loop_bandwidth"
    )
)


def figures(values: Values, evaluation: Evaluation, request: LedLinearRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LedLinearFigures(values, evaluation, request), (*OFFERS, "loop_bandwidth"))


def implied(request: LedLinearRequest) -> tuple[Requirement, ...]:
    """The LED within its sheet at the crest; the loop keeps control; the band passes."""
    data, band = request.source, request.signal.band
    bounds = [
        *led_figures.implied(request),
        Requirement("peak_current", "max", data.current_max, data.current_max),
        Requirement("compliance_margin", "min", 0.0, 0.1),
        Requirement("bandwidth", "min", band.max, band.max),
    ]
    if band.min > 0:
        bounds.append(Requirement("low_cutoff", "max", band.min, band.min))
    return tuple(bounds)


def noise_frequency(request: LedLinearRequest) -> float:
    """Where densities are stated: the middle of the band on the scale of frequencies. [Hz]"""
    low, high = noise_band(request)
    return float(np.sqrt(low * high))


def noise_band(request: LedLinearRequest) -> tuple[float, float]:
    """The signal's band; from a ten-thousandth of its end where it has no beginning. [Hz]"""
    band = request.signal.band
    return (max(band.min, band.max * 1e-4), band.max)
