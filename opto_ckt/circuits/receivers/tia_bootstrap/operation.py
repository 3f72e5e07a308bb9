"""The bootstrapped stage at the operating point of each lane, and its figures."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.receivers.feedback import operation
from opto_ckt.circuits.receivers.tia_bootstrap import follower
from opto_ckt.formulas.loop import noise_gain_plateau
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import BootstrapRequest

OFFERS = (*operation.OFFERS, "compliance_margin")


def bias(values: Values, request: BootstrapRequest) -> dict[str, float | Lanes]:
    """Stage and detector behind R5 first, then the follower at the level of the summing node."""
    leak = -follower.POLARITY[request.follower.kind] * follower.leakage(values, request)
    found = operation.biased(values, request, values["R1"], series=values["R5"], leak=leak)
    return {**found, **follower.resting(found, request, found["node.sum"])}


class BootstrapFigures(operation.FeedbackFigures):
    """Those of the stage, and what is left to its follower."""

    @cached_property
    def noise_gain(self) -> Lanes:
        """Of high frequencies, with what the follower leaves of the detector's capacitance. [V/V]"""
        values = self._values
        around = ("U1.common_capacitance", "U1.differential_capacitance", "CB")
        left = follower.left_capacitance(values) + sum(values[name] for name in around)
        return np.asarray(noise_gain_plateau(input_capacitance=left, feedback_capacitance=self._feedback_capacitance()))

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Voltage left to J1 in saturation, with its gate reverse biased. [V]"""
        return np.broadcast_to(follower.margin(self._values), self._evaluation.lanes)


def figures(values: Values, evaluation: Evaluation, request: BootstrapRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(BootstrapFigures(values, evaluation, request), OFFERS)


def implied(request: BootstrapRequest) -> tuple[Requirement, ...]:
    """As any such stage; and J1 has to stay in saturation with its gate reverse biased."""
    return (*operation.implied(request), Requirement("compliance_margin", "min", 0.0, 0.1))
