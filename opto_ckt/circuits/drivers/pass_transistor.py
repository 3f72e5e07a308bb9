"""The pass transistor between op amp and laser, MOSFET or bipolar: what it carries, what drives it, its small signals.

Voltages are counted from the rail that the sense resistor sits on, so that one set of equations serves both sides.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import singledispatch
from typing import Protocol

import numpy as np
from numpy import sqrt

from opto_ckt.formulas.transistor import (
    bipolar_transconductance,
    gate_source_voltage,
    square_law_transconductance,
)
from opto_ckt.limits import Lanes, Values
from opto_ckt.parts.transistor import BipolarData, MosfetData

LEAST_OVERDRIVE = 0.1  #: taken for an on-resistance that is stated at less above the threshold [V]


@dataclass(frozen=True)
class Around:
    """What the transistor sits in, lane by lane."""

    supply: Lanes  #: left for transistor and resistors when no current flows [V]
    series: Lanes  #: all in series with it, the sense resistor included [Ω]
    sense: Lanes  #: sense voltage over the transistor's current [Ω]
    drive: Lanes  #: the most that the op amp brings to gate or base [V]
    gate: Lanes  #: from op amp to gate or base [Ω]
    drive_current: Lanes  #: the most that the op amp delivers [A]

    def across(self, current: Lanes) -> Lanes:
        """Drain to source at a current. [V]"""
        return self.supply - current * self.series


class PassTransistor(Protocol):
    """What a driver asks of its transistor; currents are those of drain or collector."""

    def share(self, values: Values) -> float | Lanes:
        """Current of drain over that of source. [1]"""

    def hard_on(self, values: Values, around: Around) -> Lanes:
        """Current with the op amp at its rail. [A]"""

    def control_voltage(self, values: Values, current: Lanes, across: Lanes) -> Lanes:
        """Gate to source, base to emitter. [V]"""

    def control_current(self, values: Values, current: Lanes) -> float | Lanes:
        """Into gate or base. [A]"""

    def least_across(self, values: Values, current: Lanes, drive: Lanes) -> Lanes:
        """Least voltage across itself with so much between control and source at the most. [V]"""

    def margin(self, values: Values, current: Lanes, around: Around) -> Lanes:
        """Supply left over at a current: of the way of the current, or of the op amp's drive, whichever is less. [V]"""

    def small_signal(self, values: Values, current: Lanes, across: Lanes) -> dict[str, float | Lanes]:
        """Figures of the small-signal model, by name without designator."""


@dataclass(frozen=True)
class MosfetPass:
    """Square law, its triode region, and the on-resistance of the sheet as the least it ever is."""

    data: MosfetData

    def share(self, values: Values) -> float | Lanes:
        """No gate current."""
        return 1.0

    def hard_on(self, values: Values, around: Around) -> Lanes:
        """Least of saturation, triode region and stated on-resistance at the drive that is there."""
        beta, over = _beta(self.data, values), around.drive - values["Q1.threshold_voltage"]
        supply, series, sense = np.maximum(around.supply, 0.0), around.series, around.sense
        grip = beta * np.maximum(over, 0.0) * sense
        saturated = beta * np.maximum(over, 0.0) ** 2 / (1 + grip + sqrt(1 + 2 * grip))
        ratio, flow = sense / series, supply / series
        base = over - ratio * supply
        linear = beta * base + 1 / series
        root = sqrt(np.maximum(linear**2 + 4 * beta * (ratio - 0.5) * flow, 0.0))
        with np.errstate(divide="ignore", invalid="ignore"):
            triode = flow - 2 * flow / (linear + root) / series
        in_saturation = supply - saturated * series >= over - saturated * sense
        square_law = np.where(in_saturation, saturated, triode)
        stiff = self._stiffness(values)
        slope = base + stiff / series
        with np.errstate(divide="ignore", invalid="ignore"):
            across = 2 * stiff * flow / (slope + sqrt(slope**2 + 4 * ratio * stiff * flow))
        on_resistance = (supply - across) / series
        found = np.where(over > 0, np.minimum(square_law, on_resistance), 0.0)
        return np.asarray(np.maximum(np.nan_to_num(found), 0.0))

    def control_voltage(self, values: Values, current: Lanes, across: Lanes) -> Lanes:
        """Square law in saturation, its triode region below."""
        beta = _beta(self.data, values)
        saturated = gate_source_voltage(
            threshold_voltage=values["Q1.threshold_voltage"],
            transconductance=values["Q1.transconductance"],
            stated_current=self.data.transconductance_current,
            current=current,
        )
        least = np.maximum(across, 1e-6)
        triode = values["Q1.threshold_voltage"] + current / (beta * least) + least / 2
        return np.asarray(np.where(across >= sqrt(2 * current / beta), saturated, triode))

    def control_current(self, values: Values, current: Lanes) -> float | Lanes:
        """None."""
        return 0.0

    def least_across(self, values: Values, current: Lanes, drive: Lanes) -> Lanes:
        """Triode region at full drive, but not below the stated on-resistance."""
        over = np.asarray(drive - values["Q1.threshold_voltage"])
        wanted = sqrt(2 * current / _beta(self.data, values))
        gripped = np.maximum(over, wanted)
        triode = gripped - sqrt(gripped**2 - wanted**2)
        return np.asarray(np.maximum(triode, current * self._stiffness(values) / np.maximum(over, 1e-3)))

    def margin(self, values: Values, current: Lanes, around: Around) -> Lanes:
        """Drain-source voltage beyond what full drive needs; gate drive beyond what saturation needs."""
        drive = around.drive - current * around.sense
        over = drive - values["Q1.threshold_voltage"] - sqrt(2 * current / _beta(self.data, values))
        return np.asarray(np.minimum(around.across(current) - self.least_across(values, current, drive), over))

    def small_signal(self, values: Values, current: Lanes, across: Lanes) -> dict[str, float | Lanes]:
        """Transconductance ∝ √I in saturation, ∝ V_DS in the triode region, where the channel conducts as well."""
        beta = _beta(self.data, values)
        saturated = square_law_transconductance(
            transconductance=values["Q1.transconductance"],
            stated_current=self.data.transconductance_current,
            current=current,
        )
        least = np.maximum(across, 1e-6)
        triode = least < sqrt(2 * current / beta)
        reverse = values["Q1.reverse_capacitance"]
        return {
            "transconductance": np.where(triode, beta * least, saturated),
            "output_conductance": np.where(triode, np.maximum(current / least - beta * least / 2, 0.0), 0.0),
            "input_conductance": 0.0,
            "control_source_capacitance": np.maximum(values["Q1.input_capacitance"] - reverse, 1e-15),
            "control_drain_capacitance": reverse,
            "channel_noise_factor": 2 / 3,
            "gain_factor": beta,
            "control_current": 0.0,
        }

    def _stiffness(self, values: Values) -> Lanes:
        """On-resistance times overdrive, constant over the drive. [Ω V]"""
        over = self.data.on_resistance_gate - np.asarray(values["Q1.threshold_voltage"])
        return np.asarray(values["Q1.on_resistance"] * np.maximum(over, LEAST_OVERDRIVE))


@dataclass(frozen=True)
class BipolarPass:
    """Constant base-emitter and saturation voltages, constant current gain."""

    data: BipolarData

    def share(self, values: Values) -> float | Lanes:
        """β/(β + 1)."""
        gain = values["Q1.current_gain"]
        return gain / (gain + 1)

    def hard_on(self, values: Values, around: Around) -> Lanes:
        """Least of saturation, base drive and the op amp's current."""
        gain = np.asarray(values["Q1.current_gain"])
        saturated = (around.supply - values["Q1.saturation_voltage"]) / around.series
        over = around.drive - values["Q1.base_emitter_voltage"]
        driven = np.minimum(over / (around.sense + around.gate / gain), gain * around.drive_current)
        return np.asarray(np.maximum(np.minimum(saturated, driven), 0.0))

    def control_voltage(self, values: Values, current: Lanes, across: Lanes) -> Lanes:
        """As stated, whatever the current."""
        return np.asarray(values["Q1.base_emitter_voltage"] + 0.0 * current)

    def control_current(self, values: Values, current: Lanes) -> float | Lanes:
        """By the current gain."""
        return current / values["Q1.current_gain"]

    def least_across(self, values: Values, current: Lanes, drive: Lanes) -> Lanes:
        """Saturation voltage."""
        return np.asarray(values["Q1.saturation_voltage"] + 0.0 * current)

    def margin(self, values: Values, current: Lanes, around: Around) -> Lanes:
        """Beyond saturation; drive beyond base-emitter voltage, sense voltage and the drop of the base current."""
        drop = current * (around.sense + around.gate / np.asarray(values["Q1.current_gain"]))
        return np.asarray(
            np.minimum(
                around.across(current) - values["Q1.saturation_voltage"],
                around.drive - values["Q1.base_emitter_voltage"] - drop,
            )
        )

    def small_signal(self, values: Values, current: Lanes, across: Lanes) -> dict[str, float | Lanes]:
        """Transconductance qI/(kT); the transition frequency gives the input capacitance."""
        transconductance = bipolar_transconductance(current=current, temperature=values["temperature"])
        gain, collector = values["Q1.current_gain"], values["Q1.collector_capacitance"]
        diffusion = transconductance / (2 * np.pi * values["Q1.transition_frequency"]) - collector
        return {
            "transconductance": transconductance,
            "output_conductance": 0.0,
            "input_conductance": transconductance / gain,
            "control_source_capacitance": np.maximum(diffusion, 1e-15),
            "control_drain_capacitance": collector,
            "channel_noise_factor": 0.5,
            "control_current": current / gain,
        }


@singledispatch
def pass_transistor(data: object) -> PassTransistor:
    """The model of a transistor's record."""
    raise TypeError(f"no pass transistor is a {type(data).__name__}")


pass_transistor.register(MosfetData, MosfetPass)
pass_transistor.register(BipolarData, BipolarPass)


def _beta(data: MosfetData, values: Values) -> Lanes:
    """Square-law constant, of g_m = √(2 β I). [A/V²]"""
    return np.asarray(values["Q1.transconductance"], dtype=float) ** 2 / (2 * data.transconductance_current)
