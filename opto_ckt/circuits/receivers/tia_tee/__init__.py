r"""Transimpedance amplifier whose feedback is a tee, for a resistance or a capacitance that no part has.

           +---[ C1 ]--+--[ C4 ]---+      capacitive: C1, C4 and C5 to ground; else C1 alone
           |         [ C5 ]        |
           +---[ R1 ]--+--[ R4 ]---+      resistive: R1, R4 and R5 to ground; else R1 alone
           |         [ R5 ]        |
           |   |\       0          |
far --D1---+---|- \                |
          sum  | U1 >--------------+--- amp --- blocks --- out
           0 --|+ /
               |/
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.feedback import faults, loads, operation
from opto_ckt.circuits.receivers.feedback.stage import summing_node
from opto_ckt.circuits.receivers.tia_tee import network, sizing, starter, structure
from opto_ckt.request import OpAmpReceiverRequest

CIRCUIT = Circuit(
    name="tia-tee",
    title="transimpedance amplifier, tee in the feedback",
    request=OpAmpReceiverRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=network.given,
    propose=sizing.propose,
    bias=network.bias,
    figures=network.figures,
    implied=operation.implied,
    stresses=network.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=("U1.gain_bandwidth", "D1.capacitance", "U1.voltage_noise", "U1.offset_voltage", "R1"),
    remarks=network.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "leakage across the board besides conditions.leakage_resistance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=network.refused,
    input_capacitance=summing_node,
    settled=avalanche.settled,
)
