r"""LED whose current follows an analog signal: op amp, pass transistor and sense resistor about a standing current.

rail --R6--+-- ref --R2--+-- set --R9-- plus       rail
           |             |                          |
           U2            R3, C2 -- IN       |\      D1
           |             |           plus --|+\     |
         ground        ground               | U1>-R5- Q1 -- R7
                                    minus --|-/     |
                                      |     |/ |    |
                                      +---C1---+    |
                                      +------R4-----+ sense --R1-- ground
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers.led_linear import (
    faults,
    figures,
    loads,
    operation,
    remarks,
    sizing,
    starter,
    structure,
)
from opto_ckt.request import LedLinearRequest

CIRCUIT = Circuit(
    name="led-linear",
    title="linear LED driver, op amp and pass transistor",
    request=LedLinearRequest,
    topology=structure.topology,
    offers=figures.OFFERS,
    given=operation.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=figures.figures,
    implied=figures.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=("supply.positive", "D1.lifetime", "Q1.transconductance", "U1.gain_bandwidth", "R1", "C1"),
    remarks=remarks.remarks,
    noise_frequency=figures.noise_frequency,
    noise_band=figures.noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "distortion of op amp and transistor: the harmonics are those of the LED's light",
        "distortion at frequencies near the LED's own corner, and by its warming at low ones",
        "slewing at large signals",
        "change of a class 2 coupling capacitor with its voltage",
        "directions in which the light leaves, and the class of the lamp product",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
)
