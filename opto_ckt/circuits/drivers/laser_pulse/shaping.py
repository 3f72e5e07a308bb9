"""Capacitor and damping that give a peak and a width together, or what stands in their way."""

from __future__ import annotations

from math import pi
from typing import NamedTuple

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.laser import coupling, forward
from opto_ckt.circuits.drivers.laser_pulse.figures import pulse_limit, switch_limit
from opto_ckt.circuits.drivers.laser_pulse.given import budget
from opto_ckt.circuits.drivers.laser_pulse.operation import on_resistance
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import discharge, discharge_shape, laser
from opto_ckt.request import LaserPulseRequest
from opto_ckt.units import write

UNDAMPED = 3 / (2 * pi)  #: I L/(U t_w) of a discharge without damping, the most there is [1]
LEAST_DAMPING = 10e-3  #: R3, below which the parts of the loop are said to damp too much [Ω]


class Pulse(NamedTuple):
    """The pulse asked for and the loop that gives it, everything nominal."""

    current: float  #: [A]
    width: float  #: [s]
    voltage: float  #: of the charged capacitor less the laser's turn-on voltage [V]
    turn_on: float  #: [V]
    damping: float  #: ζ [1]
    capacitance: float  #: [F]
    resistance: float  #: of the whole loop [Ω]
    damping_resistance: float  #: R3 [Ω]


def asked_peak(request: LaserPulseRequest, bench: Bench, derivation: Derivation) -> float:
    """Peak current asked for, or that which gives the peak power asked for in a typical laser. [A]

    Raises
    ------
    InfeasibleError : laser or switch do not stand it.
    """
    signal, data = request.signal, request.source
    if signal.current is not None:
        current = signal.current.nominal
    else:
        temperature = bench.nominal("temperature")
        values = {name: bench.nominal(name) for name in bench.limits}
        power = (0.0 if signal.power is None else signal.power.nominal) / float(coupling(values, request))
        current = derivation.compute(
            "peak current", laser.current_for_power, reason=f"typical laser at {write(temperature, '°C')}",
            power=power, threshold=float(data.threshold_at(temperature)), slope=float(data.slope_at(temperature)),
        )  # fmt: skip
    for what, limit in (("laser", pulse_limit(request)), ("transistor", switch_limit(request))):
        if current > limit:
            raise InfeasibleError(
                f"a peak of {write(current, 'A')} is more than the {what} stands, {write(limit, 'A')}",
                [f"signal.current ≤ {write(limit, 'A')}", f"a {what} that stands {write(current, 'A')} in pulses"],
            )
    return current


def shaped(request: LaserPulseRequest, derivation: Derivation, bench: Bench, charge: float) -> Pulse:
    """C1 and R3, the capacitor charged to a voltage.

    Peak over width fixes the damping, the width then fixes the frequency, and both fix capacitance and resistance.

    Raises
    ------
    InfeasibleError : supply or inductance do not allow the current in the width, or the loop's parts damp too much.
    """
    values = {name: bench.nominal(name) for name in bench.limits}
    current, width, stray = asked_peak(request, bench, derivation), request.signal.pulse_width.nominal, values["LS"]
    turn_on, own = (float(part) for part in forward(values, request, current))
    voltage = charge - turn_on
    share = current * stray / (voltage * width) if voltage > 0 else float("inf")
    if share >= UNDAMPED:
        _refuse_slow(request, bench, current, charge, turn_on)
    damping = discharge_shape.damping_for(share=share)
    ratio = float(discharge_shape.width(damping=damping))
    reason = (
        f"{write(current, 'A')} in {write(width, 's')} from {write(voltage, 'V')} through {write(stray, 'H')} takes"
        f" ζ = {damping:.2f}, of which the width is {ratio:.3f} √(LC)"
    )
    capacitance = derivation.compute(
        "C1", discharge.storage_capacitance, reason=reason, width=width, inductance=stray, width_ratio=ratio
    )
    taken = {
        "laser": own,
        "transistor": float(on_resistance(values, request)),
        "capacitor and tracks": values["LS.resistance"],
    }
    parts = ", ".join(f"{name} {write(resistance, 'Ω')}" for name, resistance in taken.items())
    resistance = derivation.compute(
        "R3", discharge.loop_resistance, reason=f"less {parts}",
        damping=damping, inductance=stray, capacitance=capacitance,
    )  # fmt: skip
    rest = resistance - sum(taken.values())
    if rest < LEAST_DAMPING and "R3" not in request.fixed:
        _refuse_damped(request, bench, current, charge, turn_on, sum(taken.values()) + LEAST_DAMPING, parts)
    return Pulse(current, width, voltage, turn_on, damping, capacitance, resistance, rest)


def _refuse_slow(request: LaserPulseRequest, bench: Bench, current: float, charge: float, turn_on: float) -> None:
    """Even without damping the inductance lets less current flow than is asked for."""
    width, stray = request.signal.pulse_width.nominal, bench.nominal("LS")
    shares = ", ".join(f"{name} {write(part.nominal, 'H')}" for name, part in budget(request).items())
    most = UNDAMPED * max(charge - turn_on, 0.0) * width / stray
    least = turn_on + current * stray / (UNDAMPED * width)
    remedies = [f"conditions.supply.positive > {write(bench.nominal('supply.positive') * least / charge, 'V')}"]
    if most > 0:
        remedies += [
            f"less inductance in the loop, < {write(stray * most / current, 'H')}",
            f"signal.pulse_width > {write(width * current / most, 's')}",
            f"signal.current < {write(most, 'A')}",
        ]
    raise InfeasibleError(
        f"{write(charge, 'V')} through {write(stray, 'H')} ({shares}) and a laser that takes {write(turn_on, 'V')} give"
        f" no more than {write(most, 'A')} in {write(width, 's')}, without any damping; {write(current, 'A')} are asked"
        " for",
        remedies,
    )


def _refuse_damped(
    request: LaserPulseRequest, bench: Bench, current: float, charge: float, turn_on: float, least: float, parts: str
) -> None:
    """The resistance that is in the loop anyway leaves less current than is asked for."""
    width, stray = request.signal.pulse_width.nominal, bench.nominal("LS")
    damping = discharge_shape.damping_of(product=least * width / (2 * stray))
    share = float(discharge_shape.peak(damping=damping) / discharge_shape.width(damping=damping))
    most = share * (charge - turn_on) * width / stray
    needed = turn_on + (charge - turn_on) * current / most
    raise InfeasibleError(
        f"{parts} and a damping resistor of {write(LEAST_DAMPING, 'Ω')} leave {write(most, 'A')} in"
        f" {write(width, 's')} from {write(charge, 'V')}; {write(current, 'A')} are asked for",
        [
            f"conditions.supply.positive ≥ {write(bench.nominal('supply.positive') * needed / charge, 'V')}",
            f"signal.current ≤ {write(most, 'A')}",
            "a laser or a transistor with less resistance",
        ],
    )
