"""The one table of figures that a circuit can promise: name, unit, what it means, what a miss is measured by."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType


@dataclass(frozen=True)
class Figure:
    """One figure of merit, as it is asked for under `[require]` and printed in results."""

    name: str
    unit: str  #: as read and written; inside it stands in the SI base unit
    label: str
    convention: str  #: what exactly is meant where the trade has more than one use
    scale: float  #: a margin is measured against the larger of the limit and this, in the SI base unit
    decibel: float | None = None  #: factor of the logarithm that is printed beside: 10 for powers, 20 for amplitudes


_ALL = (
    Figure("transimpedance", "V/A", "transimpedance", "output voltage over photocurrent, at dc or in midband", 1.0),
    Figure(
        "bandwidth",
        "Hz",
        "bandwidth",
        "light to the last node, blocks and load included, or drive to light; -3 dB electrical, re midband",
        1.0,
    ),
    Figure(
        "optical_bandwidth", "Hz", "optical bandwidth", "drive to light: half the light, -6 dB of a photocurrent", 1.0
    ),
    Figure("low_cutoff", "Hz", "lower cut-off", "-3 dB electrical, re midband", 0.01),
    Figure("peaking", "dB", "peaking", "highest gain over midband, 20 log", 0.5),
    Figure("phase_margin", "°", "phase margin", "smallest over all crossings of unity loop gain", 45.0),
    Figure("range_margin", "1", "range margin", "light at the output's limit over the largest of its range", 1.0),
    Figure("noise_gain", "V/V", "noise gain", "1 + C_in/C_f, what the op amp sees at its crossover", 1.0),
    Figure(
        "quality_factor", "1", "quality factor", "largest of all complex pole pairs; 0.5 where all poles are real", 0.5
    ),
    Figure(
        "rise_time",
        "s",
        "rise time",
        "10-90 % of the answer to a step at the input, rise of the source excluded",
        1e-12,
    ),
    Figure("overshoot", "1", "overshoot", "of the final step", 0.05),
    Figure(
        "output_swing", "V", "output swing", "largest distance from the dark level: one level, ambient, overshoot", 0.01
    ),
    Figure("output_noise", "V", "output noise", "rms in the noise band, signal at its typical level", 1e-9),
    Figure(
        "input_noise_density",
        "A/√Hz",
        "input noise density",
        "at noise_frequency, dark current and ambient, no signal",
        1e-18,
    ),
    Figure("nep_density", "W/√Hz", "NEP density", "at noise_frequency, dark current and ambient, no signal", 1e-18),
    Figure(
        "nep_band",
        "W",
        "NEP in the band",
        "output rms noise / (midband |Zt| × responsivity); ambient, no signal",
        1e-15,
        10.0,
    ),
    Figure(
        "sensitivity",
        "W",
        "sensitivity",
        "average power at the stated bit error and extinction ratio, optimum threshold, intersymbol interference in it",
        1e-12,
        10.0,
    ),
    Figure(
        "eye_opening",
        "1",
        "eye opening",
        "least one over greatest zero of the worst pattern, best instant, per step",
        0.1,
    ),
    Figure("eye_penalty", "dB", "eye penalty", "light to add for the eye's closure, optical: -10 log of it", 0.5),
    Figure("photons_per_bit", "1", "photons per bit", "average, at the sensitivity", 1.0),
    Figure("overload", "W", "overload", "average power at which the one level reaches the swing limit", 1e-9, 10.0),
    Figure("dynamic_range", "dB", "dynamic range", "overload over sensitivity, optical: 10 log of the powers", 1.0),
    Figure("detectivity", "m·√Hz/W", "detectivity", "square root of the detector's area over nep_density", 1e6),
    Figure(
        "common_mode_rejection",
        "dB",
        "common-mode rejection",
        "gain for light on one diode over that on both, at dc, 20 log",
        20.0,
    ),
    Figure(
        "rejection_at_bandwidth",
        "dB",
        "rejection in the band",
        "as common_mode_rejection, at the bandwidth wanted",
        20.0,
    ),
    Figure("dc_offset", "V", "dc offset", "of the output, no light, from its ideal level", 1e-4),
    Figure("dark_output", "V", "dark output", "output level without light, to ground", 0.01),
    Figure("current", "A", "current", "through the source, steady", 1e-6),
    Figure("current_error", "1", "current error", "against the current asked for, either sign", 1e-3),
    Figure("bias_current", "A", "bias current", "steady part of the current through the source", 1e-6),
    Figure("modulation_current", "A", "modulation current", "one level to zero level, peak to peak", 1e-6),
    Figure(
        "optical_power",
        "W",
        "optical power",
        "average, at the stated plane; trimmed at 25 °C where the circuit has a trimmer",
        1e-9,
        10.0,
    ),
    Figure("optical_index", "1", "optical modulation index", "peak over standing light", 0.05),
    Figure(
        "extinction_ratio", "W/W", "extinction ratio", "one level over zero level, as a ratio; 10 log in dB", 1.0, 10.0
    ),
    Figure("compliance_margin", "V", "compliance margin", "supply left over at the current, at its worst", 0.1),
    Figure("clamp_current", "A", "clamp current", "the most that the clamp lets flow, whatever the monitor says", 1e-6),
    Figure("clamp_margin", "1", "clamp margin", "current that the clamp lets flow over that needed, less one", 0.05),
    Figure(
        "clamp_power", "W", "clamp power", "light at the clamp's current, at the plane of the laser's sheet", 1e-9, 10.0
    ),
    Figure(
        "runaway_factor",
        "1",
        "runaway factor",
        "loop gain of self-heating at constant power; from 1 on the laser runs away",
        0.5,
    ),
    Figure(
        "runaway_margin",
        "K",
        "runaway margin",
        "rise of the surroundings till no current holds the light there is; looked for to 300 °C inside",
        10.0,
    ),
    Figure("wavelength_shift", "m", "wavelength shift", "of the light, from that at a junction of 25 °C", 1e-10),
    Figure(
        "cooler_load", "W", "cooler load", "heat to move out of the laser's case, negative where it is warmed", 1e-3
    ),
    Figure(
        "driver_intensity_noise",
        "dB/Hz",
        "driver intensity noise",
        "of the light by the noise of the current, at noise_frequency, re the average, 10 log",
        1.0,
    ),
    Figure(
        "laser_intensity_noise", "dB/Hz", "laser intensity noise", "as the laser's sheet states it, re the average", 1.0
    ),
    Figure(
        "shot_intensity_noise",
        "dB/Hz",
        "shot intensity noise",
        "what an ideal detector sees of all the light at the plane: 2hν/P, 10 log",
        1.0,
    ),
    Figure(
        "inner_phase_margin",
        "°",
        "inner phase margin",
        "as phase_margin, of the current loop inside the power loop",
        45.0,
    ),
    Figure(
        "loop_bandwidth",
        "Hz",
        "loop bandwidth",
        "current, or power where it is controlled, over set voltage, loop closed, -3 dB",
        1.0,
    ),
    Figure(
        "peak_current",
        "A",
        "peak current",
        "largest through the source, of a pulse or in the first instant of a step",
        1e-6,
    ),
    Figure("overdrive", "1", "overdrive", "base drive over what saturates, gate voltage over that of the sheet", 0.5),
    Figure(
        "turn_off_time", "s", "turn-off time", "drive gone to light gone: storage, then sweep-out or 90-10 %", 1e-12
    ),
    Figure("startup_time", "s", "start-up time", "supply or enable there to 95 % of the current", 1e-6),
    Figure("pulse_width", "s", "pulse width", "of the current, at half of its peak", 1e-12),
    Figure("peak_power", "W", "peak power", "of the light of a pulse, at the stated plane", 1e-9, 10.0),
    Figure("pulse_energy", "J", "pulse energy", "of the light of one pulse, at the stated plane", 1e-15),
    Figure("duty", "1", "duty", "pulse width over the time between pulses", 1e-6),
    Figure("repetition_limit", "Hz", "repetition limit", "rate with five time constants of charging in a period", 1.0),
    Figure("stored_energy", "J", "stored energy", "in the storage capacitor before a pulse", 1e-12),
    Figure("discharge_time", "s", "discharge time", "after power-off, till the capacitors are safe to touch", 1e-3),
    Figure("turn_on_time", "s", "turn-on time", "in which the gate driver charges the gate of the switch", 1e-12),
    Figure("reverse_voltage", "V", "reverse voltage", "at the source after a pulse", 0.1),
    Figure("harmonic_2", "dB", "second harmonic", "re the fundamental, electrical: 20 log of the photocurrents", 1.0),
    Figure("harmonic_3", "dB", "third harmonic", "re the fundamental, electrical: 20 log of the photocurrents", 1.0),
    Figure("dissipation", "W", "dissipation", "total taken from the supplies", 1e-3),
    Figure("junction_temperature", "°C", "junction temperature", "of the hottest junction", 10.0),
    Figure("droop", "1", "droop", "of the average, half of peak to peak, after run_length equal bits", 0.01),
    Figure("margin", "dB", "link margin", "received power over sensitivity, optical: 10 log", 1.0),
)

FIGURES: Mapping[str, Figure] = MappingProxyType({figure.name: figure for figure in _ALL})
"""Every figure by its name, in the order in which figures are printed."""
