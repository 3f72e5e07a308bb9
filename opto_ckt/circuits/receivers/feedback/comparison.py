"""A stage beside the plain transimpedance amplifier of the same R1: what its other parts buy."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuits.receivers.detector import noise_frequency
from opto_ckt.circuits.receivers.feedback.stage import QUALITY
from opto_ckt.circuits.receivers.tia import structure as plain
from opto_ckt.formulas import transimpedance
from opto_ckt.limits import Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.topology import Topology
from opto_ckt.units import write


class Reach(NamedTuple):
    """What a stage does at nominal."""

    bandwidth: float  #: [Hz]
    noise: float  #: as a current of the detector, all light on, at the noise frequency [A/√Hz]


def compared(own: Topology, values: Values, request: OpAmpReceiverRequest) -> tuple[Reach, Reach]:
    """The stage at nominal, and the plain one of the same R1 with C1 for the flattest response; without blocks."""
    nominal = first_lane(values)
    without = {**nominal, "C1": capacitor_without(nominal), "C3": 0.0}
    frequency = noise_frequency(request)

    def reach(evaluation: Evaluation) -> Reach:
        density = float(noise.signal_density(evaluation, frequency)[0]) ** 0.5 * nominal["D1.responsivity"]
        return Reach(float(response.bandwidth(evaluation)[0]), density)

    return reach(evaluated(own, nominal)), reach(evaluated(plain.topology(request), without))


def said(both: tuple[Reach, Reach], request: OpAmpReceiverRequest) -> str:
    """Bandwidth and noise of the two in words."""
    (wide, quiet), (narrow, loud) = both
    return (
        f"bandwidth {write(wide, 'Hz')} against {write(narrow, 'Hz')} and noise {write(quiet, 'A/√Hz')} against"
        f" {write(loud, 'A/√Hz')} at {write(noise_frequency(request), 'Hz')} without it, R1 the same, C1 for the"
        " flattest response"
    )


def first_lane(values: Values) -> dict[str, float]:
    """The nominal corner, which comes first."""
    return {name: float(np.ravel(value)[0]) for name, value in values.items()}


def evaluated(topology: Topology, values: Values) -> Evaluation:
    """Network functions of a circuit without blocks."""
    return Network(expand(topology.with_blocks({}))).evaluate(values)


def capacitor_without(nominal: Values) -> float:
    """C1 that the same R1 would have with the detector right at the summing node. [F]"""
    total = transimpedance.feedback_capacitance(
        feedback_resistance=nominal["feedback_resistance"],
        input_capacitance=nominal["D1.capacitance"]
        + nominal["U1.common_capacitance"]
        + nominal["U1.differential_capacitance"]
        + nominal["CB"],
        gain_bandwidth=nominal["U1.gain_bandwidth"],
        quality=QUALITY["flat"],
    )
    return max(float(total) - float(nominal["CS"]), 0.0)
