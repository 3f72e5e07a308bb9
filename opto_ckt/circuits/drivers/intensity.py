"""Noise of the light: what the driver's current brings in, beside the laser's own and that of the photons."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from opto_ckt.analyses import noise
from opto_ckt.analyses.network import Evaluation
from opto_ckt.formulas.driver import output_current_noise
from opto_ckt.formulas.laser_dynamics import intensity_noise_floor
from opto_ckt.formulas.light_noise import driven_intensity_noise, sensed_current_noise
from opto_ckt.formulas.noise import thermal_voltage_noise
from opto_ckt.formulas.photodiode import responsivity
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest

SENSE = "R1 thermal"  #: noise of the sense resistor, in the network


def current_noise(values: Values, evaluation: Evaluation, frequency: float, share: float | Lanes) -> Lanes:
    """Noise of the current through the laser, from that of the sense voltage in the network. [A/√Hz]

    Parameters
    ----------
    share : laser current over sensed current; 1 unless the transistor has a base.
    """
    others = (density for label, density in noise.density_by_generator(evaluation, frequency).items() if label != SENSE)
    sensed = sensed_current_noise(
        sensed_density=sum(others), sense_resistance=values["R1"], temperature=values["temperature"]
    )
    return np.asarray(share * sensed)


def estimated_current_noise(values: Values, frequency: float) -> Lanes:
    """The same by hand, well below the loop's bandwidth: op amp, R9, R4 and R1. [A/√Hz]"""
    flicker = 1 + values.get("U1.voltage_noise_corner", 0.0) / frequency
    resistors = sum(
        thermal_voltage_noise(resistance=values[ref], temperature=values["temperature"]) ** 2 for ref in ("R4", "R9")
    )
    return np.asarray(
        output_current_noise(
            voltage_noise=np.sqrt(values["U1.voltage_noise"] ** 2 * flicker + resistors),
            sense_resistance=values["R1"],
            temperature=values["temperature"],
        )
    )


def driver_noise(current: Lanes, values: Values) -> Lanes:
    """Relative intensity noise by a noise of the laser's current; infinite of a dark laser. [dB/Hz]"""
    power = np.asarray(values["D1.optical_power"])
    with np.errstate(divide="ignore"):
        return _decibels(
            driven_intensity_noise(current_noise=current, slope=values["D1.slope_efficiency"], power=power)
        )


def laser_noise(values: Values) -> Lanes:
    """Relative intensity noise by the laser's sheet; nan where it states none. [dB/Hz]"""
    return np.asarray(values.get("D1.rin", np.nan)) + 0.0 * np.asarray(values["D1.current"])


def shot_floor(values: Values, request: LaserDriverRequest) -> Lanes:
    """Relative intensity noise that an ideal detector would see of the photons alone. [dB/Hz]"""
    ideal = responsivity(quantum_efficiency=1.0, wavelength=request.source.wavelength.nominal)
    with np.errstate(divide="ignore"):
        return _decibels(intensity_noise_floor(photocurrent=ideal * np.asarray(values["D1.optical_power"])))


def greatest(of: Mapping[str, Lanes]) -> str:
    """Name of the noise that is the greatest in the first lane; what is not known is not the greatest."""
    return max(of, key=lambda name: float(np.nan_to_num(np.ravel(of[name])[0], nan=-np.inf)))


def _decibels(ratio: float | Lanes) -> Lanes:
    return np.asarray(10 * np.log10(ratio))
