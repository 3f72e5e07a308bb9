r"""Transimpedance amplifier whose detector is driven back by a source follower.

                    positive
                      |
          +------||---+ J1 (gate at sum)     +---[ R1 ]---+
          |      C4   |                      +---[ C1 ]---+
          |          [R4]                    |   |\       |
    bias -[R5]-+      |              sum ----+---|- \     |
              far   negative          |          | U1 >---+--- amp --- post --- out
               +--------D1------------+   level -|+ /
                                                 |/

J1 moves the far end of D1 with the summing node, so that little of D1's capacitance is left between the two. The
drive is coupled through C4: D1 keeps the bias that R5 brings. J1 is of either channel, either end of D1 feeds the
amplifier; ``level`` is ground, or with a single supply a divider R2, R3 with C2 across R3.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche, refusals
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.feedback.operation import given
from opto_ckt.circuits.receivers.tia_bootstrap import faults, loads, operation, remarks, sizing, starter, structure
from opto_ckt.request import BootstrapRequest

CIRCUIT = Circuit(
    name="tia-bootstrap",
    title="transimpedance amplifier, detector bootstrapped by a JFET",
    request=BootstrapRequest,
    topology=structure.topology,
    offers=operation.OFFERS,
    given=given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=operation.figures,
    implied=operation.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=(
        "U1.gain_bandwidth", "D1.capacitance", "J1.saturation_current", "J1.voltage_noise", "U1.voltage_noise", "R1",
    ),
    remarks=remarks.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above",
        "drift of J1's current and pinch-off voltage with temperature, taken as within the spread of its sheet",
        "1/f noise of J1",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=refusals.refused,
    input_capacitance=sizing.itemised,
    settled=avalanche.settled,
)  # fmt: skip
