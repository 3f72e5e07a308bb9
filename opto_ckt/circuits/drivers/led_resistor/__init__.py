r"""LED behind a resistor: from the rail, or from a logic output that sources or sinks its current.

rail --R1--+               U1 >--R1--+              rail --R1--+
           |                         |                         |
           D1                        D1                        D1
           |                         |                         |
         ground                    ground                      +--< U1
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers.led_resistor import (
    faults,
    figures,
    loads,
    operation,
    remarks,
    sizing,
    starter,
    structure,
)
from opto_ckt.request import LedDriverRequest

CIRCUIT = Circuit(
    name="led-resistor",
    title="LED behind a resistor, from the rail or a logic output",
    request=LedDriverRequest,
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
    levers=("supply.positive", "D1.forward_position", "D1.lifetime", "U1.high", "U1.sink_resistance", "R1"),
    remarks=remarks.remarks,
    noise_frequency=figures.noise_frequency,
    noise_band=figures.noise_band,
    not_checked=(
        "layout and inductance of the leads",
        "electromagnetic compatibility",
        "large steps: speed is that of small ones about the current, switching on from dark is slower",
        "noise of the supply and of the logic output",
        "directions in which the light leaves, and the class of the lamp product",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
)
