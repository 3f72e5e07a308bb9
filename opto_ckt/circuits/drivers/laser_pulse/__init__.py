r"""Pulse driver of a laser: a capacitor, charged through a resistor, is discharged into the laser by a switch.

    positive --R1--+-- store --R3-- anode --D1-- cathode --LS-- drain
       |           |     |            +----- D2 -----+            |
       C2          R2    C1                         U1 --R4--+-- Q1
       |           |     |                                   R5   |
    ground       ground  ground                           ground  ground

LS is the inductance of the whole loop; D2 across the laser carries what swings back.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers.laser_pulse import (
    eyes,
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
from opto_ckt.request import LaserPulseRequest

CIRCUIT = Circuit(
    name="laser-pulse",
    title="pulse driver of a laser, capacitor discharged by a switch",
    request=LaserPulseRequest,
    topology=structure.topology,
    offers=figures.OFFERS,
    given=given.given,
    propose=sizing.propose,
    bias=operation.bias,
    figures=figures.figures,
    implied=figures.implied,
    stresses=loads.stresses,
    heat=loads.heat,
    faults=faults.faults,
    outcome=faults.outcome,
    levers=("supply.positive", "LS", "D1.slope_efficiency", "D1.series_resistance", "Q1.on_resistance", "C1", "R3"),
    remarks=remarks.remarks,
    noise_frequency=figures.noise_frequency,
    noise_band=figures.noise_band,
    not_checked=(
        "jitter and delay of trigger, gate driver and turn-on",
        "how the gate's own speed rounds the front of the pulse",
        "inductance between the laser and its clamp diode, and of the gate's loop",
        "warmth of laser and switch within one pulse; on-resistance of a warm switch",
        "turn-on delay, relaxation oscillation and afterglow of the laser: its light follows its current",
        "voltage that avalanches the switch when its current is broken off",
        "class of the laser product: for a competent person, by the local rules",
        "layout, supply impedance, electromagnetic compatibility",
    ),
    formulas=sizing.FORMULAS,
    refused=given.refused,
    eye_safety=eyes.advice,
    starter=starter.STARTER,
)
