r"""Photodiode into a load resistor, with a buffer behind it.

    far --D1--+-- sum --|+ \
              |         | U1 >--+--- amp --- blocks --- out
            [ R1 ]   +--|- /    |
              |      +--[ R4 ]--+       with gain, or as an equaliser
            level  [ R5 ]
                   [ C5 ]               of an equaliser only, to ground
                   level

Low impedance: R1 small enough for the band. High impedance: R1 as large as the light allows, far quieter; the current
integrates on the capacitance, and R4, R5 and C5 lift what that has lost. ``level`` is ground, or with a single supply
a divider R2, R3 with C2 behind a follower U2, which the current of R1 does not move.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.load_resistor import (
    faults,
    load,
    loads,
    operation,
    remarks,
    sizing,
    starter,
    structure,
)
from opto_ckt.request import LoadResistorRequest

CIRCUIT = Circuit(
    name="load-resistor",
    title="photodiode into a load resistor, buffer or equaliser",
    request=LoadResistorRequest,
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
    levers=("D1.capacitance", "U1.gain_bandwidth", "U1.voltage_noise", "R1", "C5"),
    remarks=remarks.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
        "loop of a level's follower, but for the poles it leaves",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=operation.refused,
    input_capacitance=load.input_capacitance,
    settled=avalanche.settled,
)
