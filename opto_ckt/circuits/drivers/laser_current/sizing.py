"""Exact values of the constant-current laser driver, each with its window."""

from __future__ import annotations

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.budget import Share, budget
from opto_ckt.circuits.drivers.compensation import compensation
from opto_ckt.circuits.drivers.fitting import (
    Sizing,
    capacitor_spread,
    fit_common,
    fit_current,
    fit_filter,
    refuse_unsuited,
)
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, driver_loop, laser, laser_heating, reference, supply_filter, transistor
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

DIVIDER_CURRENT = 100e-6  #: common practice: far above the input bias current [A]
SETTLED = 0.95  #: of the current, at the end of the soft start
NEAR = 1.013  #: a window that holds one or two values of E96
FORMULAS = (
    driver.sense_resistance,
    driver.fail_safe_resistance,
    driver.compliance,
    driver.series_resistance,
    driver.output_current_noise,
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
    laser.current_for_power,
    laser_heating.runaway_factor,
)


def propose(request: LaserDriverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : laser, supply, reference or amplifier leave no values.
    """
    refuse_unsuited(request, bench)
    share = budget(request, derivation, bench)
    sizing = Sizing(request, derivation)
    fit_current(sizing, bench, share)
    _reference(sizing, bench, share)
    fit_common(sizing)
    _slow(sizing, bench)
    fit_filter(sizing)
    others = {ref: part.exact for ref, part in sizing.parts.items()}
    return (*sizing.parts.values(), compensation(request, derivation, bench, others))


def _reference(sizing: Sizing[LaserDriverRequest], bench: Bench, share: Share) -> None:
    """Divider from the reference to the set voltage; R6 keeps the reference fed at the lowest supply.

    Raises
    ------
    InfeasibleError : the lowest supply is below the reference, or the divider would have to raise it.
    """
    request, derivation = sizing.request, sizing.derivation
    voltage = bench.nominal("U2.voltage")
    if share.sense >= voltage:
        raise InfeasibleError(
            f"the sense voltage of {write(share.sense, 'V')} is not below the reference of {write(voltage, 'V')}",
            [f"R1 ≤ {write(0.9 * voltage / share.asked, 'Ω')}", f"reference.voltage ≥ {write(1.1 * share.sense, 'V')}"],
        )
    lower = share.sense / DIVIDER_CURRENT
    if "R2" in request.fixed:
        lower = request.fixed["R2"] * share.sense / (voltage - share.sense)
    sizing.fit(
        "R3", lower, "resistors", low=lower / NEAR, high=lower * NEAR,
        why=f"{write(share.sense, 'V')} at {write(DIVIDER_CURRENT, 'A')}, common practice",
    )  # fmt: skip
    upper = derivation.compute(
        "R2", reference.upper_resistance, reason=f"{write(share.sense, 'V')} from {write(voltage, 'V')}",
        voltage=voltage, tap_voltage=share.sense, lower=sizing["R3"],
    )  # fmt: skip
    sizing.fit("R2", upper, "resistors", low=0.93 * upper, high=1.07 * upper)
    supply = bench.low("supply.positive") - share.worst * bench.high("L1.resistance")
    highest, drawn = bench.high("U2.voltage"), request.reference.operating_current + DIVIDER_CURRENT
    if supply <= highest:
        raise InfeasibleError(
            f"the lowest supply, {write(supply, 'V')}, does not feed a reference of {write(highest, 'V')}",
            [
                f"reference.voltage ≤ {write(0.7 * supply, 'V')}",
                f"conditions.supply.positive ≥ {write(1.5 * highest, 'V')}",
            ],
        )
    feed = derivation.compute(
        "R6",
        driver.series_resistance,
        reason=f"({write(supply, 'V')} - {write(highest, 'V')}) / {write(drawn, 'A')}: reference and divider fed at"
        " the lowest supply",
        supply=supply,
        switch_drop=0.0,
        forward_voltage=highest,
        current=drawn,
    )
    feed /= 1 + resistor_spread(request)
    sizing.fit("R6", feed, "resistors", low=0.95 * feed, high=feed)


def _slow(sizing: Sizing[LaserDriverRequest], bench: Bench) -> None:
    """C2: the current rises with the set voltage and is there in the time asked for, C2 and divider at their most."""
    request = sizing.request
    parallel = float(reference.parallel_resistance(first=sizing["R2"], second=sizing["R3"]))
    limits = request.require.get("startup_time")
    duration = request.signal.startup_time if limits is None or limits.max is None else limits.max
    most = (1 + capacitor_spread(request)) * (1 + resistor_spread(request))
    exact = sizing.derivation.compute(
        "C2",
        reference.soft_start_capacitance,
        reason=f"95 % in {write(duration, 's')} with {write(parallel, 'Ω')} and C2 at its most",
        resistance=parallel * most,
        duration=duration,
        fraction=SETTLED,
    )
    sizing.fit("C2", exact, "bypass", low=exact / 10, high=exact)
