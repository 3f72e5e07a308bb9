r"""Transimpedance amplifier of switched gain: a branch beside R1 and C1 for every brighter range.

           +---[ R4 ]---+
           +---[ C4 ]---+-- S1 --+
           +-------[ R1 ]--------+
           +-------[ C1 ]--------+
           |   |\                |
bias --D1--+---|- \              |
          sum  | U1 >------------+--- amp --- blocks --- out
       level --|+ /
               |/
"""

from __future__ import annotations

from dataclasses import replace

from opto_ckt.circuits.receivers.tia import CIRCUIT as PLAIN
from opto_ckt.circuits.receivers.tia_switched import operation, sizing, starter, structure, surroundings
from opto_ckt.request import SwitchedRequest

CIRCUIT = replace(
    PLAIN,
    name="tia-switched",
    title="transimpedance amplifier, switched gain",
    request=SwitchedRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=operation.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=operation.figures,
    implied=operation.implied,
    stresses=surroundings.stresses,
    faults=surroundings.faults,
    levers=("U1.gain_bandwidth", "D1.capacitance", "U1.voltage_noise", "S1.off_capacitance", "R1"),
    remarks=surroundings.remarks,
    not_checked=(
        *PLAIN.not_checked,
        "charge injected by the contacts and what drives them",
        "light at which the range is changed: for what drives the contacts",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=operation.refused,
    input_capacitance=sizing.summing_capacitance,
)
