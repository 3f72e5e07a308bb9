"""What a designer ought to be told about a sized bootstrap: first of all, what it buys."""

from __future__ import annotations

import numpy as np

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuits.receivers.detector import noise_frequency, wanted_bandwidth
from opto_ckt.circuits.receivers.feedback import remarks as feedback
from opto_ckt.circuits.receivers.feedback.stage import QUALITY
from opto_ckt.circuits.receivers.tia import structure as plain
from opto_ckt.circuits.receivers.tia_bootstrap import follower, structure
from opto_ckt.circuits.receivers.tia_bootstrap.bias import FASTER
from opto_ckt.formulas import junction_fet, transimpedance
from opto_ckt.formulas.noise import thermal_voltage_noise
from opto_ckt.limits import Limits, Values
from opto_ckt.preferred import DIELECTRICS
from opto_ckt.request import BootstrapRequest
from opto_ckt.topology import Topology
from opto_ckt.units import write


def remarks(values: Values, limits: Limits, request: BootstrapRequest) -> tuple[str, ...]:
    """What the bootstrap buys, where it begins and how fast it is; then what is said of any such stage."""
    found = [bought(values, request), *_reach(values, request), *_noise(values, request)]
    if request.follower.gate_current is None:
        found.append("gate leakage of J1: its record states no gate_current, left out of levels and noise")
    return (*found, *feedback.remarks(values, limits, request))


def bought(values: Values, request: BootstrapRequest) -> str:
    """Capacitance, bandwidth and noise at nominal with the bootstrap, and of the same R1 with C1 anew without it."""
    nominal = first_lane(values)
    with_it = evaluated(structure.topology(request), nominal)
    without = evaluated(plain.topology(request), {**nominal, "C1": capacitor_without(nominal), "C3": 0.0})
    kept, whole = (
        write(float(value), "F") for value in (follower.left_capacitance(nominal), nominal["D1.capacitance"])
    )
    widths = [write(float(response.bandwidth(each)[0]), "Hz") for each in (with_it, without)]
    frequency = noise_frequency(request)
    noises = [
        write(float(noise.signal_density(each, frequency)[0]) ** 0.5 * nominal["D1.responsivity"], "A/√Hz")
        for each in (with_it, without)
    ]
    return (
        f"the bootstrap leaves {kept} of D1's {whole} at the summing node; bandwidth {widths[0]} against"
        f" {widths[1]} and noise {noises[0]} against {noises[1]} at {write(frequency, 'Hz')} without it, R1 the same,"
        " C1 for the flattest response"
    )


def first_lane(values: Values) -> dict[str, float]:
    """The nominal corner, which comes first."""
    return {name: float(np.ravel(value)[0]) for name, value in values.items()}


def evaluated(topology: Topology, values: Values) -> Evaluation:
    """Network functions of a circuit without blocks."""
    return Network(expand(topology.with_blocks({}))).evaluate(values)


def capacitor_without(nominal: Values) -> float:
    """C1 that the same R1 would have with the detector's capacitance in full. [F]"""
    total = transimpedance.feedback_capacitance(
        feedback_resistance=nominal["feedback_resistance"],
        input_capacitance=nominal["D1.capacitance"]
        + nominal["U1.common_capacitance"]
        + nominal["U1.differential_capacitance"]
        + nominal["CB"],
        gain_bandwidth=nominal["U1.gain_bandwidth"],
        quality=QUALITY["flat"],
    )
    return max(float(total) - float(nominal["CS"]), 0.0)


def _reach(values: Values, request: BootstrapRequest) -> list[str]:
    """Where the bootstrap begins, and how far above the signal it ends."""
    corner = 1 / (2 * np.pi * np.asarray(values["C4"]) * np.asarray(values["R5"]))
    found = [f"the bootstrap begins at {write(float(np.max(corner)), 'Hz')}; below, D1 counts in full"]
    pole, wanted = float(np.min(follower.own_bandwidth(values))), wanted_bandwidth(request)
    if wanted is not None and pole < FASTER * wanted:
        steep = junction_fet.least_transconductance(
            bandwidth=FASTER * wanted,
            load_resistance=float(np.min(follower.load_resistance(values))),
            diode=float(np.max(values["D1.capacitance"])),
            gate_source=float(np.max(values["J1.control_source_capacitance"])),
        )
        found.append(
            f"the bootstrap is slow: its pole g_m/(2π (C_d + C_gs)) comes down to {write(pole, 'Hz')} against"
            f" {FASTER:g} × {write(wanted, 'Hz')}; J1 with {write(float(steep), 'A/V')} or more would be fast enough"
        )
    if DIELECTRICS[request.preferred.bypass.dielectric].class_number == 2:
        found.append("C4 as a class 2 ceramic is a microphone, which D1's capacitance passes on: film where it shakes")
    return found


def _noise(values: Values, request: BootstrapRequest) -> list[str]:
    """Where J1, at the current that it has, makes more noise than its sheet states, or than the op amp."""
    own = thermal_voltage_noise(
        resistance=np.asarray(values["J1.channel_noise_factor"]) / values["J1.transconductance"],
        temperature=np.asarray(values["temperature"]),
    )
    nominal, stated = float(np.ravel(own)[0]), request.follower.voltage_noise.nominal
    found = []
    if nominal > 1.01 * stated:
        found.append(
            f"J1 makes {write(nominal, 'V/√Hz')} at its current, more than the {write(stated, 'V/√Hz')} of its sheet"
        )
    amplifier = request.amplifier.voltage_noise.nominal
    if nominal > amplifier:
        found.append(
            f"J1's {write(nominal, 'V/√Hz')} across D1 is more than the {write(amplifier, 'V/√Hz')} of U1 that it takes"
            " off it: no gain in noise"
        )
    return found
