r"""LED switched to ground by a saturated transistor that a logic output drives.

    rail --R1--+--R4--+-- led --D1--+-- drain
               |      |      |      |    |
               +--C2--+      +--R5--+    |
                                         |
    U1 >--+--R2--+-- control ----------- Q1        R6 from drain to ground keeps the LED just on
          |      |       |               |
          +--C1--+       R3            ground
                         |
                       ground

R4 with C2 peaks the current where a bandwidth beyond the LED's own is asked for; C1 (bipolar), R5 and R6 as asked for.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers.led_figures import noise_band, noise_frequency
from opto_ckt.circuits.drivers.led_switch import (
    faults,
    figures,
    limits,
    loads,
    operation,
    remarks,
    sizing,
    starter,
    structure,
)
from opto_ckt.request import LedSwitchRequest

CIRCUIT = Circuit(
    name="led-switch",
    title="LED switched by a saturated transistor",
    request=LedSwitchRequest,
    topology=structure.topology,
    offers=figures.OFFERS,
    given=operation.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=figures.figures,
    refused=limits.refused,
    implied=figures.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=("supply.positive", "D1.lifetime", "Q1.on_resistance", "Q1.current_gain", "U1.high", "R1"),
    remarks=remarks.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and inductance of the leads",
        "electromagnetic compatibility",
        "large steps: bandwidth and rise time are those of small ones about the lit LED",
        "rise and fall of the transistor's own current; its storage is computed",
        "noise of the supply",
        "directions in which the light leaves, and the class of the lamp product",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
)
