r"""Two equal detectors whose light is subtracted.

    currents:  far --D1--+-- sum --[ TIA ]-- amp         outputs:  far --D1-- sum  --[ TIA ]-- amp
              far2 --D2--+                                         far --D2-- sum2 --[ TIA ]-- amp2

Subtracted as currents, one amplifier sees the difference alone, and twice the capacitance. Subtracted as outputs, each
diode has its own amplifier, and the parts of the two have to match.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.tia_balanced import loads, operation, sizing, starter, structure
from opto_ckt.request import OpAmpReceiverRequest

CIRCUIT = Circuit(
    name="tia-balanced",
    title="two detectors, their difference amplified",
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
    faults=loads.faults,
    outcome=loads.outcome,
    levers=("U1.gain_bandwidth", "U1.voltage_noise", "R1"),
    remarks=loads.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "how equal the light on the two diodes is",
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=operation.refused,
    input_capacitance=sizing.summing_capacitance,
    settled=avalanche.settled,
)
