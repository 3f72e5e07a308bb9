"""Capacitor and damping that give a peak and a width together, or what stands in their way."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from math import inf, pi
from typing import NamedTuple, NoReturn

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
FURTHEST = 1e4  #: how far width or inductance are moved in the search for one that would do [1]
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

    Peak over width fixes the damping, the width then fixes the frequency, and both fix capacitance and resistance. With
    C1 fixed in the design file the peak alone is kept, with R3 fixed the width alone.

    Raises
    ------
    InfeasibleError : supply or inductance do not allow the current in the width, or the loop's parts damp too much.
    """
    values = {name: bench.nominal(name) for name in bench.limits}
    current, width, stray = asked_peak(request, bench, derivation), request.signal.pulse_width.nominal, values["LS"]
    turn_on, own = (float(part) for part in forward(values, request, current))
    voltage = charge - turn_on
    taken = {
        "laser": own,
        "transistor": float(on_resistance(values, request)),
        "capacitor and tracks": values["LS.resistance"],
    }
    share = current * stray / (voltage * width) if voltage > 0 else inf
    if {"C1", "R3"} <= set(request.fixed):
        whole = request.fixed["R3"] + sum(taken.values())
        damping = float(discharge.damping_ratio(resistance=whole, inductance=stray, capacitance=request.fixed["C1"]))
    elif "C1" in request.fixed:
        damping = _for_peak(request, bench, current, charge, turn_on, sum(taken.values()) + LEAST_DAMPING)
    elif "R3" in request.fixed:
        whole = request.fixed["R3"] + sum(taken.values())
        damping = discharge_shape.damping_of(product=whole * width / (2 * stray))
    elif share >= UNDAMPED:
        _refuse(request, bench, current, charge, turn_on, taken)
    else:
        damping = discharge_shape.damping_for(share=share)
    ratio = float(discharge_shape.width(damping=damping))
    reason = (
        f"{write(current, 'A')} in {write(width, 's')} from {write(voltage, 'V')} through {write(stray, 'H')} takes"
        f" ζ = {damping:.2f}, of which the width is {ratio:.3f} √(LC)"
    )
    capacitance = derivation.compute(
        "C1", discharge.storage_capacitance, reason=reason, width=width, inductance=stray, width_ratio=ratio
    )
    capacitance = request.fixed.get("C1", capacitance)
    parts = ", ".join(f"{name} {write(resistance, 'Ω')}" for name, resistance in taken.items())
    resistance = derivation.compute(
        "R3", discharge.loop_resistance, reason=f"less {parts}",
        damping=damping, inductance=stray, capacitance=capacitance,
    )  # fmt: skip
    rest = request.fixed.get("R3", resistance - sum(taken.values()))
    if rest < LEAST_DAMPING and "R3" not in request.fixed:
        _refuse(request, bench, current, charge, turn_on, taken)
    return Pulse(current, width, voltage, turn_on, damping, capacitance, resistance, rest)


def undamped_capacitance(request: LaserPulseRequest, bench: Bench) -> float:
    """C1 that the width asks for without damping, or as it is fixed: to begin with. [F]"""
    width = request.signal.pulse_width.nominal
    ratio = discharge.pulse_width(inductance=1.0, capacitance=1.0)
    exact = discharge.storage_capacitance(width=width, inductance=bench.nominal("LS"), width_ratio=ratio)
    return request.fixed.get("C1", float(exact))


def _for_peak(
    request: LaserPulseRequest, bench: Bench, current: float, charge: float, turn_on: float, least: float
) -> float:
    """Damping that leaves the peak asked for of a capacitor that the design file fixes.

    Raises
    ------
    InfeasibleError : with the resistance that is in the loop anyway it gives less.
    """
    capacitance, stray, voltage = request.fixed["C1"], bench.nominal("LS"), charge - turn_on

    def most(volts: float, farads: float) -> float:
        damping = discharge.damping_ratio(resistance=least, inductance=stray, capacitance=farads)
        whole = discharge.undamped_peak(voltage=volts, inductance=stray, capacitance=farads)
        return float(whole * discharge_shape.peak(damping=damping))

    if most(max(voltage, 0.0), capacitance) < current:
        supply = bench.nominal("supply.positive") * (turn_on + current / most(1.0, capacitance)) / charge
        remedies = [f"conditions.supply.positive ≥ {write(supply, 'V')}"]
        if voltage > current * least:
            larger = _least_factor(lambda factor: most(voltage, factor * capacitance) >= current)
            remedies.append(f"C1 ≥ {write(capacitance * larger, 'F')}")
        raise InfeasibleError(
            f"C1, fixed at {write(capacitance, 'F')}, gives no more than {write(most(voltage, capacitance), 'A')}"
            f" through {write(stray, 'H')} and {write(least, 'Ω')}; {write(current, 'A')} are asked for",
            remedies,
        )
    whole = discharge.undamped_peak(voltage=voltage, inductance=stray, capacitance=capacitance)
    return discharge_shape.damping_at(peak_share=current / float(whole))


def most_current(voltage: float, width: float, stray: float, resistance: float) -> float:
    """Greatest peak of a width that a loop allows, whatever its capacitor. [A]"""
    damping = discharge_shape.damping_of(product=resistance * width / (2 * stray))
    share = float(discharge_shape.peak(damping=damping) / discharge_shape.width(damping=damping))
    return share * voltage * width / stray


def _refuse(
    request: LaserPulseRequest, bench: Bench, current: float, charge: float, turn_on: float, taken: Mapping[str, float]
) -> NoReturn:
    """Inductance and the resistance that is in the loop anyway let less current flow than is asked for.

    Raises
    ------
    InfeasibleError : always.
    """
    width, stray, supply = request.signal.pulse_width.nominal, bench.nominal("LS"), bench.nominal("supply.positive")
    voltage, least = charge - turn_on, sum(taken.values()) + LEAST_DAMPING
    strays = ", ".join(f"{name} {write(part.nominal, 'H')}" for name, part in budget(request).items())
    resistances = ", ".join(f"{name} {write(resistance, 'Ω')}" for name, resistance in taken.items())
    most = most_current(max(voltage, 0.0), width, stray, least)
    needed = turn_on + current / most_current(1.0, width, stray, least)
    remedies = [f"conditions.supply.positive ≥ {write(supply * needed / charge, 'V')}"]
    if voltage > current * least:
        slimmer = _least_factor(lambda factor: most_current(voltage, width, stray / factor, least) >= current)
        longer = _least_factor(lambda factor: most_current(voltage, width * factor, stray, least) >= current)
        remedies += [
            f"less inductance in the loop, ≤ {write(stray / slimmer, 'H')}",
            f"signal.pulse_width ≥ {write(width * longer, 's')}",
        ]
    if most > 0:
        remedies.append(f"signal.current ≤ {write(most, 'A')}")
    raise InfeasibleError(
        f"{write(charge, 'V')}, of which the laser takes {write(turn_on, 'V')}, give no more than {write(most, 'A')} in"
        f" {write(width, 's')} through {write(stray, 'H')} ({strays}) and {write(least, 'Ω')} ({resistances}, a damping"
        f" resistor of {write(LEAST_DAMPING, 'Ω')}); {write(current, 'A')} are asked for",
        remedies,
    )


def _least_factor(does: Callable[[float], bool]) -> float:
    """Least factor above 1 from which on something does. [1]"""
    low, high = 1.0, 2.0
    while not does(high) and high < FURTHEST:
        low, high = high, 2 * high
    for _ in range(40):
        middle = (low + high) / 2
        low, high = (low, middle) if does(middle) else (middle, high)
    return high
