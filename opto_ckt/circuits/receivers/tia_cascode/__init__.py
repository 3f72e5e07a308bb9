r"""Transimpedance amplifier behind a transistor in common base.

                                positive
                                  [R5]    +---[ R1 ]---+
                                   |      +---[ C1 ]---+
    bias --D1--+-- emitter  Q1 ----+------+   |\       |
               |           level   sum    +---|- \     |
              [R4]                            | U1 >---+--- amp --- post --- out
            negative                   level -|+ /
                                              |/

The emitter of Q1 takes the photocurrent at kT/(qI), so that the detector's capacitance makes a pole far up, and is not
there for the op amp. R4 sets the current I, R5 brings it back to the collector. Q1 is npn where the cathode of D1 feeds
it, pnp, all turned round, where the anode does; its base lies at ``level``, as the + input of U1.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import noise_band, noise_frequency
from opto_ckt.circuits.receivers.tia_cascode import faults, loads, operation, remarks, sizing, starter, structure
from opto_ckt.request import CascodeRequest

CIRCUIT = Circuit(
    name="tia-cascode",
    title="transimpedance amplifier behind a common-base transistor",
    request=CascodeRequest,
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
    levers=(
        "U1.gain_bandwidth", "D1.capacitance", "Q1.current_gain", "U1.voltage_noise", "R4", "R1",
    ),
    remarks=remarks.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "recovery after overload beyond the figure above, and of Q1 from saturation",
        "current gain and transition frequency of Q1 at other currents than that of the design",
        "noise of the rails through R4 and R5",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
    refused=faults.refused,
    input_capacitance=sizing.behind_transistor,
    settled=avalanche.settled,
)  # fmt: skip
