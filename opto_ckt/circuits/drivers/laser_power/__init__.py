r"""Laser driver that holds the average power: an integrator watches the monitor diode and sets a current source.

    ref --R13--+-- level --R15-- plus3                     rail
               C2               |\                          |
               |          plus3-|+\   power                D1 ~~> monitor --> mon
              near              | U3>--+--R2--+-- set       |
                            inv-|-/    |      R3           R7
                             |  |/     |      |             |
                             +---C4----+     near    +-- Q1 +
                             R10                     |
                              |        set --R9-- + U1       sense --R1-- near
              near --RV1--R14-+-- mon --R16-- ref

The current source is that of the constant-current driver: R1, U1, Q1, with C1 and R4. The integrator's swing through R2
and R3 is the clamp: whatever the monitor says, no more than the whole swing's share flows; R7 stays below it where Q1
is hard on. More resistance in R14 and RV1 is less light; RV1 is a rheostat, so that an open wiper lowers the power.
R16 keeps the integrator, and so the laser, off while the level is shorted.
``near`` is ground on the low side, the rail on the high side, where all is upside down.
"""

from __future__ import annotations

from opto_ckt.circuit import Circuit
from opto_ckt.circuits.drivers.eye_safety import advice
from opto_ckt.circuits.drivers.laser_power import (
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
from opto_ckt.request import LaserPowerRequest

CIRCUIT = Circuit(
    name="laser-power",
    title="laser driver with power control by the monitor diode",
    request=LaserPowerRequest,
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
    levers=(
        "supply.positive",
        "D1.slope_efficiency",
        "D1.threshold_current",
        "D1.monitor_responsivity",
        "D1.junction_to_case",
        "U1.gain_bandwidth",
        "C4",
    ),
    remarks=remarks.remarks,
    eye_safety=advice,
    noise_frequency=figures.noise_frequency,
    noise_band=figures.noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "class of the laser product: for a competent person, by the local rules",
        "inductance of leads and package of the laser; its modulator, where it has one",
        "relaxation oscillation and intensity noise of the laser",
        "feedback of light into the laser",
        "temperature of the transistor on its own voltages; base resistance of a bipolar one",
        "saturation of the filter's inductor",
        "noise of the trimmer's wiper",
    ),
    formulas=sizing.FORMULAS,
    starter=starter.STARTER,
)
