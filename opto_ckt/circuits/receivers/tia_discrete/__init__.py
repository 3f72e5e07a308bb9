r"""Two transistors with shunt feedback, for bands or noise that no op amp reaches.

                    positive
                   [ R2 ]   |
             col ----+----|< Q2
                     |      |
far --D1--+-- sum --|< Q1   +--- amp --- blocks --- out
          |          |      |
          |          0    [ R3 ]
          +--[ R1 ]---------+  negative or ground
          +--[ C1 ]---------+
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.tia_discrete import loads, operation, refusals, sizing, starter, structure
from opto_ckt.request import DiscreteRequest

CIRCUIT = Circuit(
    name="tia-discrete",
    title="two-transistor transimpedance amplifier, shunt feedback",
    request=DiscreteRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=operation.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=operation.figures,
    implied=operation.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=loads.faults,
    outcome=loads.outcome,
    levers=("Q1.transition_frequency", "Q1.collector_capacitance", "D1.capacitance", "R1"),
    remarks=loads.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "inductance of leads and vias",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=refusals.refused,
    input_capacitance=sizing.input_capacitance,
    settled=avalanche.settled,
)
