"""What the two halves are at a temperature, a supply and a light, and how well they cancel.

D1 receives the signal, D2 steady light of the same average power, both the same ambient light.
"""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.amplifier import either_sign
from opto_ckt.circuits.receivers.detector import POLARITY, detected, detector_limits, wanted_bandwidth
from opto_ckt.circuits.receivers.feedback import operation
from opto_ckt.circuits.receivers.feedback.operation import FeedbackFigures
from opto_ckt.circuits.receivers.tia_balanced.structure import PAIRS, by_outputs, second_node, second_supply
from opto_ckt.limits import Figures, Lanes, Limit, Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.topology import GROUND

OFFERS = (*operation.OFFERS, "common_mode_rejection", "rejection_at_bandwidth")
PERFECT = 120.0  #: rejection beyond it is a matter of rounding [dB]
implied = operation.implied


def given(request: OpAmpReceiverRequest) -> dict[str, Limit]:
    """As of one amplifier, and the same of what is there twice."""
    limits = {**operation.given(request), **detector_limits(request, "D2")}
    if by_outputs(request):
        limits |= {PAIRS[name]: limits[name] for name in ("CS", "CB", "RB")} | either_sign(request.amplifier, "U2")
        return limits
    wanted = second_supply(request)
    spread = abs(wanted) * request.conditions.supply.tolerance if second_node(request) == "bias2" else 0.0
    return {**limits, "supply.bias2": Limit(wanted, wanted - spread, wanted + spread)}


def bias(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    """Both diodes in their feeds; levels at the average light."""
    if by_outputs(request):
        first = operation.bias(values, request)
        second = operation.bias(_second(values), request)
        like = {theirs: second[ours] for ours, theirs in _likes(second).items()}
        return {
            **first,
            **like,
            "D2.power": values["signal.power"],
            "D2.reverse_bias": second["detector.reverse_bias"],
            "node.amp2": second["node.amp"],
            "node.sum2": second["node.sum"],
        }
    level, sign = request.conditions.input_level, POLARITY[request.detector.output]
    node = second_node(request)
    supply = 0.0 if node == GROUND else values[f"supply.{node}"]
    left = sign * (supply - level)
    other = detected({**values, "detector.reverse_bias": left}, request, "D2")
    drawn = other["D2.responsivity"] * values["signal.power"] + other["D2.ambient_current"] + other["D2.dark_current"]
    found = operation.biased(values, request, values["R1"], leak=-sign * drawn)
    return {**found, **other, "D2.power": values["signal.power"], "D2.reverse_bias": left}


def _second(values: Values) -> Values:
    """Values with what the second half has in the places of the first."""
    likes = {theirs: values[ours] for theirs, ours in _likes(values).items() if ours in values}
    return {**values, **likes}


def _likes(values: Values) -> dict[str, str]:
    """Names of values of the first half -> names of their likes."""
    return {name: f"{PAIRS[head]}{name[len(head) :]}" for name in values if (head := name.partition(".")[0]) in PAIRS}


class BalancedFigures(FeedbackFigures):
    """The receiver's figures for light on D1, and what is left of light on both.

    Overload and swing are those of a missing beam: a whole one through either diode.
    """

    _request: OpAmpReceiverRequest

    def __init__(self, values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> None:
        self._whole = values
        apart = np.abs(values["D1.dark_current"] - values["D2.dark_current"])
        super().__init__({**values, "D1.dark_current": apart, "summing_leak": 0.0}, evaluation, request)

    def _headroom_of(self, values: Values, request: OpAmpReceiverRequest) -> float | Lanes:
        """Where the currents are subtracted the second beam alone drives the output the other way. [V]"""
        if by_outputs(request):
            return super()._headroom_of(values, request)
        return np.asarray(np.min(np.broadcast_arrays(*operation.rooms(values, request).values()), axis=0))

    @cached_property
    def dc_offset(self) -> Lanes:
        """All errors of the output in the dark with one sign; of two amplifiers those of both. [V]"""
        if not by_outputs(self._request):
            return super().dc_offset
        one, other = (operation.dark(values, self._request)["offset"] for values in (self._whole, _second(self._whole)))
        return np.asarray(one + other)

    def _input_capacitance(self) -> Lanes | float:
        shared = 0.0 if by_outputs(self._request) else self._whole["D2.capacitance"]
        return super()._input_capacitance() + shared

    @cached_property
    def dark_output(self) -> Lanes:
        """Output voltage in the dark, between the two outputs where there are two. [V]"""
        if not by_outputs(self._request):
            return super().dark_output
        one, other = (operation.dark(values, self._request)["output"] for values in (self._whole, _second(self._whole)))
        return np.asarray(one - other)

    @cached_property
    def common_mode_rejection(self) -> Lanes:
        """Gain for light on one diode over that for equal light on both, at DC. [dB]"""
        return self._rejection(0.0)

    @cached_property
    def rejection_at_bandwidth(self) -> Lanes:
        """The same at the bandwidth wanted. [dB]"""
        return self._rejection(wanted_bandwidth(self._request) or 1e6)

    def _rejection(self, frequency: float) -> Lanes:
        one = response.transfer_at(self._evaluation, frequency)
        both = one + response.rival_at(self._evaluation, frequency)
        with np.errstate(divide="ignore"):
            return np.asarray(np.minimum(20 * np.log10(np.abs(one) / np.abs(both)), PERFECT))


def figures(values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(BalancedFigures(values, evaluation, request), OFFERS)


def refused(request: OpAmpReceiverRequest) -> tuple[Refusal, ...]:
    """Diodes without bias in one node; a far end of D2 that no supply of the two rails can hold."""
    found = list(refusals.refused(request))
    if not by_outputs(request) and not request.detector.resting_bias:
        message = 'two diodes in one node need a bias each way; or target.balance = "outputs"'
        found.append(Refusal(("detector", "reverse_bias"), message))
    return tuple(found)
