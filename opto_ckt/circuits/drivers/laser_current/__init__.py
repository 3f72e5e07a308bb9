r"""Constant-current laser driver: op amp, pass transistor, sense resistor; on the low side, or mirrored on the high.

    rail --R6--+-- ref --R2--+-- set --R9-- plus      rail
               |             |                         |
               U2            R3, C2            |\      D1 (D2 across)
               |             |          plus --|+\     |
              near          near               | U1>-R5- Q1 -- R7
                                       minus --|-/     |
                                         |     |/ |    |
                                         +---C1---+    |
                                         +------R4-----+ sense --R1-- near

``near`` is ground on the low side, the rail on the high side; R7 keeps the laser safe with Q1 hard on. L1 with R8
across it and C3 filter the supply; Q2 shorts the set voltage unless the disable input is pulled low.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers import warmth
from opto_ckt.circuits.drivers.eye_safety import advice
from opto_ckt.circuits.drivers.laser_current import (
    faults,
    figures,
    given,
    loads,
    operation,
    remarks,
    sizing,
    starter,
    structure,
)
from opto_ckt.request import LaserDriverRequest

CIRCUIT = Circuit(
    name="laser-current",
    title="constant-current laser driver, op amp and pass transistor",
    request=LaserDriverRequest,
    topology=structure.topology,
    offers=figures.OFFERS,
    given=given.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=figures.figures,
    implied=figures.implied,
    stresses=loads.stresses,
    heat=warmth.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=(
        "supply.positive",
        "D1.slope_efficiency",
        "D1.threshold_current",
        "Q1.transconductance",
        "U1.gain_bandwidth",
        "U2.voltage",
        "C1",
    ),
    remarks=remarks.remarks,
    eye_safety=advice,
    noise_frequency=figures.noise_frequency,
    noise_band=figures.noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "class of the laser product: for a competent person, by the local rules",
        "inductance of leads and package of the laser",
        "relaxation oscillation of the laser, and noise of its light near it",
        "feedback of light into the laser",
        "temperature of the transistor on its own voltages; base resistance of a bipolar one",
        "saturation of the filter's inductor",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
)
