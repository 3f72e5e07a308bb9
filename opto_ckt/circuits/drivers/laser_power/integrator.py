"""R10 and C4 of the integrator: slower than monitor, current loop and data, fast enough to start in time."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import product

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.fitting import Sizing
from opto_ckt.circuits.drivers.laser_power import figures, operation
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import laser_modulation, power_loop
from opto_ckt.limits import Lanes
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write

INTEGRATOR = 100e3  #: R10, and R15 like it; far above the set resistor as a rule, common practice [Ω]
APART = 4.0  #: the monitor's pole and the current loop lie so many times above the crossover; common practice
DROOP = 0.02  #: over the longest run, where none is asked for; common practice
SHARE = 0.4  #: of the start-up time for the integrator, the soft start having most of the rest
DECIDES = ("D1.slope_efficiency", "D1.threshold_current", "D1.monitor_responsivity", "D1.tracking_error", "temperature")


def fit_integrator(
    sizing: Sizing[LaserPowerRequest], bench: Bench, current_loop: Bench, others: Mapping[str, float]
) -> None:
    """C4 between what the loop must not be faster than and what it must not be slower than.

    Raises
    ------
    InfeasibleError : there is nothing between.
    """
    request: LaserPowerRequest = sizing.request
    lead = sizing.known("R10", sizing.known("R15", INTEGRATOR))
    sizing.fit("R10", lead, "resistors", lead, lead, "common practice: far above the set resistor, which it loads")
    sizing.fit("R15", lead, "resistors", lead, lead, "like R10: equal drops of the input bias currents; keeps C2 from"
               " feeding U3's input when the supply fails")  # fmt: skip
    gain, onset, total = _gain(bench, request, {**others, "R10": lead, "R15": lead, "C4": 1e-9})
    most_gain, least_gain = float(np.max(gain)), float(np.min(gain))
    ceiling, top = _ceiling(request, bench, current_loop, others, float(np.max(total)))
    floor, bottom = _floor(request, lead, least_gain, float(np.max(onset)))
    stock = request.preferred.capacitors
    spread = (1 + stock.tolerance) * (1 + resistor_spread(request))
    least = power_loop.integration_capacitance(gain=most_gain, resistance=lead, bandwidth=top) * spread
    most = power_loop.integration_capacitance(gain=least_gain, resistance=lead, bandwidth=bottom) / spread
    if least > most and "C4" not in request.fixed:
        raise InfeasibleError(
            f"the power loop must stay below {write(top, 'Hz')} at its fastest, {ceiling}, and above"
            f" {write(bottom, 'Hz')} at its slowest, {floor}; slope and temperature spread it"
            f" {most_gain / least_gain:.3g} : 1 and parts {spread**2:.3g} : 1",
            _remedies(request, float(least / most)),
        )
    middle = float((least * most) ** 0.5)
    aim = sizing.derivation.compute(
        "C4", power_loop.integration_capacitance,
        reason=f"crossover below {write(top, 'Hz')} ({ceiling}) and above {write(bottom, 'Hz')} ({floor}) at every"
        f" corner: {write(float(least), 'F')} … {write(float(most), 'F')}",
        gain=(most_gain * least_gain) ** 0.5, resistance=lead,
        bandwidth=(most_gain * least_gain) ** 0.5 / (2 * np.pi * lead * middle),
    )  # fmt: skip
    sizing.fit("C4", aim, "capacitors", low=float(least), high=float(most))


def _gain(bench: Bench, request: LaserPowerRequest, fitted: Mapping[str, float]) -> tuple[Lanes, Lanes, Lanes]:
    """Loop gain, output at the threshold over the set level, and set resistance, at the corners that decide."""
    names = [name for name in DECIDES if bench.limits[name].varies]
    corners = [*product(*((bench.low(name), bench.high(name)) for name in names)), [bench.nominal(n) for n in names]]
    lanes = {name: np.array([corner[i] for corner in corners]) for i, name in enumerate(names)}
    nominal = {name: np.full(len(corners), bench.nominal(name)) for name in bench.limits}
    values = operation.bias({**nominal, **fitted, **lanes}, request)
    share = pass_transistor(request.transistor).share(values)
    onset = values["D1.threshold_current"] * values["R1"] / share * (values["R2"] + values["R3"]) / values["R3"]
    total = np.asarray(values["R14"] + values["RV1.setting"])
    return figures.loop_gain(values, request), np.asarray(onset / values["set_voltage"]), total


def _ceiling(
    request: LaserPowerRequest, bench: Bench, current_loop: Bench, others: Mapping[str, float], resistance: float
) -> tuple[str, float]:
    """What the loop must not be faster than, and that frequency. [Hz]"""
    names = ("Q1.transconductance", "Q1.transition_frequency", "U1.gain_bandwidth")
    slow = {name: bench.low(name) for name in names if name in bench.limits}
    inner = float(current_loop.evaluate({**others, **slow})["loop_bandwidth"][0])
    stray = bench.high("U3.common_capacitance")
    pole = power_loop.monitor_pole(resistance=resistance, capacitance=bench.high("D1.monitor_capacitance") + stray)
    found = {
        f"{APART:g} times below the monitor's pole of {write(float(pole), 'Hz')}": float(pole) / APART,
        f"{APART:g} times below the current loop of {write(inner, 'Hz')}": inner / APART,
    }
    signal, droop, wanted = request.signal, request.require.get("droop"), request.require.get("loop_bandwidth")
    if signal.bit_rate is not None:
        run = laser_modulation.run_duration(run_length=signal.run_length, bit_rate=signal.bit_rate)
        allowed = DROOP if droop is None or droop.max is None else droop.max
        said = f"for a droop of {percent(allowed)} over {signal.run_length} bits, {write(float(run), 's')}"
        found[said] = float(power_loop.bandwidth_for_droop(droop=allowed, duration=run))
    if wanted is not None and wanted.max is not None:
        found["loop_bandwidth asked for"] = wanted.max
    least = min(found, key=lambda name: found[name])
    return least, found[least]


def _floor(request: LaserPowerRequest, lead: float, gain: float, onset: float) -> tuple[str, float]:
    """What the loop must not be slower than, and that frequency. [Hz]"""
    limits, wanted = request.require.get("startup_time"), request.require.get("loop_bandwidth")
    duration = SHARE * (request.signal.startup_time if limits is None or limits.max is None else limits.max)
    unit = duration / (max(onset - 1, 0.0) + 3 / gain)
    found = {f"to start in {write(duration, 's')}": float(power_loop.crossover_of(time_constant=unit / gain))}
    if wanted is not None and wanted.min is not None:
        found["loop_bandwidth asked for"] = wanted.min
    most = max(found, key=lambda name: found[name])
    return most, found[most]


def _remedies(request: LaserPowerRequest, short: float) -> list[str]:
    """What would have to give way, each alone, by the factor that the window lacks."""
    limits, signal = request.require.get("startup_time"), request.signal
    duration = signal.startup_time if limits is None or limits.max is None else limits.max
    key = "signal.startup_time" if limits is None or limits.max is None else "require.startup_time.max"
    found = [f"{key} ≥ {write(duration * short * 1.05, 's')}"]
    if signal.bit_rate is not None:
        found += [f"signal.bit_rate ≥ {write(signal.bit_rate * short, 'bit/s')}", "a shorter signal.run_length"]
        found.append("require.droop.max higher")
    return found
