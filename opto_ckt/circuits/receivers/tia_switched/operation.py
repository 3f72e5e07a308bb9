"""Which range is in use, what its contacts are, and the figures: of the range, or of the faintest for faint light."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feedback import operation
from opto_ckt.circuits.receivers.feedback.operation import FeedbackFigures
from opto_ckt.circuits.receivers.tia.structure import lifts_noise_gain
from opto_ckt.circuits.receivers.tia_switched.structure import Branch, branches
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import SwitchedRequest
from opto_ckt.topology import OPEN
from opto_ckt.units import write

OF_ALL_LIGHT = ("overload", "dynamic_range")
"""Figures of a fixed gain; here every range ends where the next begins."""
OFFERS = (*(name for name in operation.OFFERS if name not in OF_ALL_LIGHT), "range_margin")
NOTHING = 1e-18  #: capacitance across a closed contact [F]


def given(request: SwitchedRequest) -> dict[str, Limit]:
    """As of a plain stage; whether each branch is in use, at nominal the one for the typical light."""
    lights = [each.power for each in request.gain_ranges]
    usual = next(place for place, light in enumerate(lights) if request.signal.power.nominal <= light * (1 + 1e-9))
    used = {branch.closed: Limit(float(branch.place == usual), 0.0, 1.0) for branch in branches(request)}
    return operation.given(request) | used


def bias(values: Values, request: SwitchedRequest) -> dict[str, float | Lanes]:
    """The contacts in their positions; light as far as the range goes; then the levels of the stage."""
    found: dict[str, float | Lanes] = dict(values)
    total, light, leak = (np.asarray(each) for each in (values["R1"], request.gain_ranges[0].power, 0.0))
    left = np.asarray(1.0)  # whether no brighter range is asked for: of two the brighter is the one in use
    for branch in reversed(branches(request)):
        used = left * np.asarray(values[branch.closed]) > 0.5
        closed = used & (np.asarray(values.get(f"{branch.switch}.works", 1.0)) > 0.5)
        found |= _contact(values, request, branch, closed)
        through = values[branch.resistor] + values[f"{branch.switch}.on_resistance"]
        total = np.where(closed, parallel_resistance(first=values["R1"], second=through), total)
        light = np.where(used, request.gain_ranges[branch.place].power, light)
        leak = leak + np.where(closed, 0.0, found[f"{branch.switch}.leak"])
        left = left * (1 - used)
    asked = np.asarray(values["signal.power"])
    found["signal.power"] = np.where(asked <= request.signal.power.high, np.minimum(asked, light), asked)
    found["range.light"] = light
    return operation.biased(found, request, total, leak=leak)


def _contact(
    values: Values, request: SwitchedRequest, branch: Branch, closed: NDArray[np.bool_]
) -> dict[str, float | Lanes]:
    """Resistance, capacitance and leakage of a contact; the leakage adds to the dark current."""
    ref = branch.switch
    grown = dark_current(
        dark_current=values[f"{ref}.leakage"],
        temperature=values["temperature"],
        reference_temperature=ROOM_TEMPERATURE,
        doubling=request.analog_switch.leakage_doubling,
    )
    return {
        f"{ref}.resistance": np.where(closed, values[f"{ref}.on_resistance"], OPEN),
        f"{ref}.capacitance": np.where(closed, NOTHING, values[f"{ref}.off_capacitance"]),
        f"{ref}.leak": POLARITY[request.detector.output] * grown,
    }


def conducts(values: Values, branch: Branch) -> NDArray[np.bool_]:
    """Whether a contact is closed and works."""
    return np.asarray(np.asarray(values[f"{branch.switch}.resistance"]) < OPEN / 2)


class SwitchedFigures(FeedbackFigures):
    """The figures of the range in use, and how far its light leaves the output from its limit."""

    _request: SwitchedRequest

    @cached_property
    def range_margin(self) -> Lanes:
        """Light at which the one level reaches the output's limit, over the largest of the range. [1]"""
        return np.asarray(self.overload / self._values["range.light"])

    def _feedback_capacitance(self) -> Lanes | float:
        """From the output to the summing node, strays and the branch in use included. [F]"""
        values, total = self._values, super()._feedback_capacitance()
        for branch in branches(self._request):
            total = total + np.where(conducts(values, branch), values[branch.capacitor], 0.0)
        return total

    @cached_property
    def _faintest(self) -> FeedbackFigures:
        """Figures of the faintest range at the same corner."""
        values = bias({**self._values, **{branch.closed: 0.0 for branch in branches(self._request)}}, self._request)
        return FeedbackFigures(values, self._evaluation.at(values), self._request)

    @cached_property
    def input_noise_density(self) -> Lanes:
        """Of the faintest range. [A/√Hz]"""
        return self._faintest.input_noise_density

    @cached_property
    def nep_density(self) -> Lanes:
        """Of the faintest range. [W/√Hz]"""
        return self._faintest.nep_density

    @cached_property
    def nep_band(self) -> Lanes:
        """Of the faintest range. [W]"""
        return self._faintest.nep_band

    @cached_property
    def sensitivity(self) -> Lanes:
        """Of the faintest range. [W]"""
        return self._faintest.sensitivity


def figures(values: Values, evaluation: Evaluation, request: SwitchedRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(SwitchedFigures(values, evaluation, request), OFFERS)


def implied(request: SwitchedRequest) -> tuple[Requirement, ...]:
    """In no range may the output reach its limit, or the loop ring."""
    kept = [each for each in operation.implied(request) if each.figure not in OF_ALL_LIGHT]
    return (Requirement("range_margin", "min", 1.0, 1.0), *kept)


def refused(request: SwitchedRequest) -> tuple[Refusal, ...]:
    """A decompensated op amp; a contact that does not stand the output."""
    found = list(refusals.refused(request))
    if lifts_noise_gain(request):
        gain = request.amplifier.minimum_stable_gain.nominal
        message = f"an op amp that needs a noise gain of {gain:.3g} leaves no window for every range; one stable at 1"
        found.append(Refusal(("amplifier", "minimum_stable_gain"), message))
    supply = request.conditions.supply
    most, limit = max(supply.positive, abs(supply.negative)), request.analog_switch.voltage_max
    if most > limit:
        message = f"the output may reach {write(most, 'V')}, voltage_max is {write(limit, 'V')}"
        found.append(Refusal(("analog_switch", "voltage_max"), message))
    return tuple(found)
