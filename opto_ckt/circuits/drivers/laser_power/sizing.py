"""Exact values of the power-controlled laser driver, each with its window."""

from __future__ import annotations

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.budget import Demand, shared_out
from opto_ckt.circuits.drivers.compensation import compensation
from opto_ckt.circuits.drivers.fitting import (
    Sizing,
    capacitor_spread,
    fit_common,
    fit_current,
    fit_filter,
    refuse_unsuited,
)
from opto_ckt.circuits.drivers.laser import Most
from opto_ckt.circuits.drivers.laser_power import inner
from opto_ckt.circuits.drivers.laser_power.clamp import Need, clamp, needed, shares, swing
from opto_ckt.circuits.drivers.laser_power.integrator import fit_integrator
from opto_ckt.circuits.drivers.laser_power.refusals import refuse_dark_zero, refuse_strained_monitor
from opto_ckt.circuits.drivers.laser_power.trim import fit_trimmer
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import (
    driver,
    driver_loop,
    laser,
    laser_heating,
    laser_modulation,
    power_loop,
    reference,
    supply_filter,
    transistor,
)
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write

DIVIDER_CURRENT = 100e-6  #: common practice: far above the input bias current [A]
SOFT_START = 10e3  #: R13, common practice [Ω]
SHARE = 0.5  #: of the start-up time that the soft start may take; the integrator has the rest
SETTLED = 0.95
NEAR = 1.013  #: a window that holds one or two values of E96
FORMULAS = (
    power_loop.set_resistance,
    power_loop.power_loop_bandwidth,
    power_loop.integration_capacitance,
    power_loop.crossover_of,
    power_loop.monitor_pole,
    power_loop.loop_droop,
    power_loop.bandwidth_for_droop,
    laser_modulation.run_duration,
    laser_modulation.modulation_for_extinction,
    laser_modulation.extinction_ratio,
    laser.monitor_current,
    laser.current_for_power,
    laser_heating.runaway_factor,
    driver.sense_resistance,
    driver.fail_safe_resistance,
    driver.compliance,
    driver.series_resistance,
    driver_loop.gate_pole,
    driver_loop.crossover_estimate,
    driver_loop.compensation_resistance,
    driver_loop.compensation_capacitance,
    reference.upper_resistance,
    reference.soft_start_capacitance,
    supply_filter.filter_corner,
    supply_filter.damping_resistance,
    transistor.square_law_transconductance,
    transistor.gate_source_voltage,
)


def propose(request: LaserPowerRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : laser, monitor, supply, reference or amplifier leave no values.
    """
    refuse_unsuited(request, bench)
    refuse_dark_zero(request, bench)
    refuse_strained_monitor(request, bench)
    need = needed(request, bench, derivation)
    safe = clamp(request, bench, derivation, need)
    power = request.signal.power
    demand = Demand(
        need.current, need.current, safe, "signal.power", 0.0 if power is None else power.nominal, "W", need.threshold
    )
    share = shared_out(request, derivation, bench, demand)
    sizing = Sizing(request, derivation)
    fit_current(sizing, bench, share)
    _divider(sizing, bench, need, safe)
    _reference(sizing, bench, need)
    fit_common(sizing)
    fit_trimmer(sizing, bench)
    fit_filter(sizing)
    others = {ref: part.exact for ref, part in sizing.parts.items()}
    least, most = inner.least_current(request, bench), need.current
    between = inner.bench_between(request, bench, least, most)
    margin = request.require.get("inner_phase_margin")
    loop = compensation(request, derivation, between, others, {} if margin is None else {"phase_margin": margin})
    fit_integrator(sizing, bench, between, others | {"C1": loop.exact})
    return (*sizing.parts.values(), loop)


def _divider(sizing: Sizing[LaserPowerRequest], bench: Bench, need: Need, safe: Most) -> None:
    """R2 and R3: the integrator at its end lets the clamp's current flow, and no more."""
    request, derivation = sizing.request, sizing.derivation
    sense = sizing["R1"]
    least, most = shares(request, bench, need, safe, sense)
    low, high = swing(request, bench, need)
    share = min(least * 1.01, (least * most) ** 0.5)
    end = (low + high) / 2
    lower = share * end / DIVIDER_CURRENT
    if "R2" in request.fixed:
        lower = request.fixed["R2"] * share / (1 - share)
    sizing.fit(
        "R3", lower, "resistors", low=lower / NEAR, high=lower * NEAR,
        why=f"{write(share * end, 'V')} at {write(DIVIDER_CURRENT, 'A')}, common practice",
    )  # fmt: skip
    upper = derivation.compute(
        "R2", reference.upper_resistance,
        reason=f"clamp: the integrator's end, {write(low, 'V')} at least, lets {write(need.current, 'A')} flow and,"
        f" {write(high, 'V')} at most, no more than {write(safe.current, 'A')}: {safe.reason}",
        voltage=end, tap_voltage=share * end, lower=sizing["R3"],
    )  # fmt: skip
    sizing.fit("R2", upper, "resistors", low=0.9 * upper, high=1.1 * upper)


def _reference(sizing: Sizing[LaserPowerRequest], bench: Bench, need: Need) -> None:
    """R6 keeps the reference fed at the lowest supply; R13 and C2 let the set level rise slowly.

    Raises
    ------
    InfeasibleError : the lowest supply is below the reference, or the op amp's inputs do not work at its level.
    """
    request, derivation = sizing.request, sizing.derivation
    supply = bench.low("supply.positive") - need.current * bench.high("L1.resistance")
    highest, drawn = bench.high("U2.voltage"), request.reference.operating_current
    if supply <= highest:
        raise InfeasibleError(
            f"the lowest supply, {write(supply, 'V')}, does not feed a reference of {write(highest, 'V')}",
            [
                f"reference.voltage ≤ {write(0.7 * supply, 'V')}",
                f"conditions.supply.positive ≥ {write(1.5 * highest, 'V')}",
            ],
        )
    _refuse_level(sizing, bench, supply, highest)
    feed = derivation.compute(
        "R6", driver.series_resistance,
        reason=f"({write(supply, 'V')} - {write(highest, 'V')}) / {write(drawn, 'A')}: fed at the lowest supply",
        supply=supply, switch_drop=0.0, forward_voltage=highest, current=drawn,
    )  # fmt: skip
    feed /= 1 + resistor_spread(request)
    sizing.fit("R6", feed, "resistors", low=0.95 * feed, high=feed)
    sizing.fit("R13", SOFT_START, "resistors", SOFT_START, SOFT_START,
               "common practice: far above the reference's own resistance")  # fmt: skip
    limits = request.require.get("startup_time")
    duration = SHARE * (request.signal.startup_time if limits is None or limits.max is None else limits.max)
    most = (1 + capacitor_spread(request)) * (1 + resistor_spread(request))
    exact = derivation.compute(
        "C2", reference.soft_start_capacitance,
        reason=f"95 % in {write(duration, 's')}, {percent(SHARE)} of the start-up time, R13 and C2 at their most",
        resistance=sizing["R13"] * most, duration=duration, fraction=SETTLED,
    )  # fmt: skip
    sizing.fit("C2", exact, "bypass", low=exact / 10, high=exact)


def _refuse_level(sizing: Sizing[LaserPowerRequest], bench: Bench, supply: float, highest: float) -> None:
    """The integrator's inputs rest at the reference's voltage from the near rail."""
    amplifier, low = sizing.request.amplifier, inner.on_low_side(sizing.request)
    near = amplifier.common_mode_to_negative if low else amplifier.common_mode_to_positive
    far = amplifier.common_mode_to_positive if low else amplifier.common_mode_to_negative
    if near is not None and near.high > bench.low("U2.voltage"):
        raise InfeasibleError(
            f"the integrator's inputs rest {write(bench.low('U2.voltage'), 'V')} off the rail of the set resistor,"
            f" they work from {write(near.high, 'V')} on",
            [
                f"reference.voltage ≥ {write(near.high * 1.05, 'V')}",
                "an amplifier that works at that rail",
            ],
        )
    if far is not None and supply - highest < far.high:
        raise InfeasibleError(
            f"the integrator's inputs rest {write(supply - highest, 'V')} off the far rail at the lowest supply, they"
            f" work from {write(far.high, 'V')} on",
            [f"reference.voltage ≤ {write(supply - far.high, 'V')}", "an amplifier whose common mode goes further"],
        )
