"""A transimpedance amplifier bought whole: what surrounds it is sized.

    far --D1--+-- sum --[ U1 ]-- amp --- blocks --- out

Its bias filter, coupling and post filter are blocks; usual from about 100 Mbit/s up.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.tia_fixed import operation, starter, structure, surroundings
from opto_ckt.request import FixedTiaRequest

CIRCUIT = Circuit(
    name="tia-fixed",
    title="transimpedance amplifier bought whole",
    request=FixedTiaRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=operation.given,
    propose=surroundings.propose,
    bias=operation.bias,
    figures=operation.figures,
    implied=operation.implied,
    stresses=surroundings.stresses,
    heat=surroundings.heat,
    faults=surroundings.faults,
    outcome=surroundings.outcome,
    levers=("D1.capacitance", "U1.input_noise_density", "U1.bandwidth", "U1.overload_current"),
    remarks=surroundings.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "what the amplifier's sheet says of its output level and polarity",
        "electromagnetic compatibility",
    ),
    formulas=surroundings.FORMULAS,
    starter=starter.STARTER,
    refused=operation.refused,
    settled=avalanche.settled,
)
