r"""Transimpedance amplifier with resistive feedback, one op amp.

               +---[ R1 ]---+
               +---[ C1 ]---+
               |   |\       |
    bias --D1--+---|- \     |
              sum  | U1 >---+--- amp --- post --- out
           level --|+ /
                   |/

``level`` is ground, or with a single supply a divider R2, R3 with C2 across R3. Either end of D1 feeds the amplifier.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche, refusals
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.feedback import faults, loads, operation, remarks
from opto_ckt.circuits.receivers.feedback.stage import summing_node
from opto_ckt.circuits.receivers.tia import sizing, starter, structure
from opto_ckt.request import OpAmpReceiverRequest

CIRCUIT = Circuit(
    name="tia",
    title="transimpedance amplifier, resistive feedback",
    request=OpAmpReceiverRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=operation.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=operation.figures,
    implied=operation.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=("U1.gain_bandwidth", "D1.capacitance", "U1.voltage_noise", "U1.current_noise", "R1"),
    remarks=remarks.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=refusals.refused,
    input_capacitance=summing_node,
    settled=avalanche.settled,
)
