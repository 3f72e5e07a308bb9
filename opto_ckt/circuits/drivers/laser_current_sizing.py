"""Exact values of the constant-current laser driver, each with its window."""

from __future__ import annotations

from itertools import product
from math import inf

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.laser import side_of
from opto_ckt.circuits.drivers.laser_current_budget import GATE, Share, budget, resistor_spread
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, driver_loop, laser, laser_heating, reference, supply_filter, transistor
from opto_ckt.limits import Lanes, Limit
from opto_ckt.preferred import DIELECTRICS
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

DIVIDER_CURRENT = 100e-6  #: common practice: far above the input bias current [A]
SENSE_LEAD = 1e3  #: R4 from the sense node, and R9 like it ahead of the other input; common practice [Ω]
PULL_UP = 100e3  #: common practice [Ω]
BYPASS = 100e-9  #: at the op amp's supply pin, common practice [F]
FILTER_CAPACITANCE, FILTER_INDUCTANCE = 10e-6, 10e-6
"""Supply filter: its corner of 16 kHz lies below the frequencies of switching converters; common practice [F, H]"""

DAMPING = 0.7  #: least of the supply filter [1]
SETTLED = 0.95  #: of the current, at the end of the soft start
SCAN = np.geomspace(1 / 30, 30, 41)  #: C1 tried, as multiples of the closed form
ALLOWED_PEAKING, LEAST_MARGIN = 0.5, 60.0
"""Where nothing is asked for: common practice [dB, °]"""

DECIDES = (
    "Q1.transconductance", "Q1.input_capacitance", "Q1.transition_frequency", "Q1.current_gain",
    "U1.gain_bandwidth", "U1.second_pole", "U1.output_resistance",
)  # fmt: skip
"""Limits whose combinations make the corners of the loop."""

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
    if bench.nominal("U1.minimum_stable_gain") > 1:
        raise InfeasibleError(
            f"the noise gain falls to 1 through C1, U1 is stable from {bench.nominal('U1.minimum_stable_gain'):g} on",
            ["an amplifier that is stable at a gain of 1"],
        )
    share = budget(request, derivation, bench)
    sizing = _Sizing(request, derivation)
    _current(sizing, bench, share)
    _reference(sizing, bench, share)
    _common(sizing)
    _slow(sizing, bench)
    _filter(sizing)
    c1 = _compensation(sizing, bench)
    return (*sizing.parts.values(), c1)


class _Sizing:
    """Parts in the order in which they are sized; what the design file fixes is kept."""

    def __init__(self, request: LaserDriverRequest, derivation: Derivation) -> None:
        self.request, self.derivation = request, derivation
        self.parts: dict[str, Fitted] = {}

    def __getitem__(self, ref: str) -> float:
        return self.parts[ref].exact

    def fit(self, ref: str, exact: float, stock: str, low: float = 0.0, high: float = inf, why: str = "") -> None:
        """One part; ``why`` for those that no formula gives."""
        fixed = self.request.fixed.get(ref)
        if fixed is not None:
            self.derivation.note(ref, "fixed in the design file")
        elif why:
            self.derivation.note(ref, why)
        series = getattr(self.request.preferred, stock).series
        value = exact if fixed is None else fixed
        self.parts[ref] = Fitted(ref, value, series, low=low, high=high, fixed=fixed is not None)

    def known(self, ref: str, otherwise: float) -> float:
        """The value that the design file fixes, else another."""
        return self.request.fixed.get(ref, otherwise)


def _current(sizing: _Sizing, bench: Bench, share: Share) -> None:
    """R1 for the sense voltage, R7 in its window."""
    nominal = {name: bench.nominal(name) for name in bench.limits}
    alpha = float(pass_transistor(sizing.request.transistor).share(nominal))
    exact = sizing.derivation.compute(
        "R1",
        driver.sense_resistance,
        reason=f"{write(share.sense, 'V')} / {write(share.asked / alpha, 'A')}; "
        + sizing.derivation.reasons.get("sense voltage", ""),
        reference=share.sense,
        current=share.asked / alpha,
    )
    sizing.fit("R1", exact, "resistors", low=0.93 * exact, high=1.07 * exact)
    least, most = share.series
    sizing.fit("R7", least, "resistors", low=least, high=most)


def _reference(sizing: _Sizing, bench: Bench, share: Share) -> None:
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
        "R3", lower, "resistors", low=0.99 * lower, high=1.01 * lower,
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
            [f"reference.voltage ≤ {write(0.7 * supply, 'V')}", f"conditions.supply.positive ≥ {write(1.5 * highest, 'V')}"],
        )
    feed = derivation.compute(
        "R6",
        driver.series_resistance,
        reason=f"({write(supply, 'V')} - {write(highest, 'V')}) / {write(drawn, 'A')}: reference and divider fed at the lowest"
        " supply",
        supply=supply,
        switch_drop=0.0,
        forward_voltage=highest,
        current=drawn,
    )
    feed /= 1 + resistor_spread(request)
    sizing.fit("R6", feed, "resistors", low=0.95 * feed, high=feed)


def _common(sizing: _Sizing) -> None:
    """Values by common practice."""
    lead = sizing.known("R4", SENSE_LEAD)
    sizing.fit("R4", SENSE_LEAD, "resistors", SENSE_LEAD, SENSE_LEAD, "common practice: lets C1 take over the loop")
    sizing.fit(
        "R9", lead, "resistors", lead, lead, "like R4: equal drops of the input bias currents; keeps C2 from feeding U1's"
        " input when the supply fails",
    )  # fmt: skip
    sizing.fit("R5", GATE, "resistors", GATE, GATE, "common practice: parts U1 from the capacitance of Q1")
    if sizing.request.signal.enable:
        why = "common practice: an open input keeps the laser off"
        sizing.fit("R11", PULL_UP, "resistors", PULL_UP, PULL_UP, why)
        if side_of(sizing.request) == "high":
            sizing.fit("R12", PULL_UP, "resistors", PULL_UP, PULL_UP, "common practice: Q2 off unless Q3 conducts")
    sizing.fit("C8", BYPASS, "bypass", BYPASS, BYPASS, "common practice: 100 nF close to the supply pin")
    if sizing.request.conditions.supply.negative:
        sizing.fit("C9", BYPASS, "bypass", BYPASS, BYPASS, "common practice: 100 nF close to the supply pin")


def _slow(sizing: _Sizing, bench: Bench) -> None:
    """C2: the current rises with the set voltage and is there in the time asked for, C2 and divider at their most."""
    request = sizing.request
    parallel = float(reference.parallel_resistance(first=sizing["R2"], second=sizing["R3"]))
    limits = request.require.get("startup_time")
    duration = request.signal.startup_time if limits is None or limits.max is None else limits.max
    most = (1 + _capacitor_spread(request)) * (1 + resistor_spread(request))
    exact = sizing.derivation.compute(
        "C2",
        reference.soft_start_capacitance,
        reason=f"95 % in {write(duration, 's')} with {write(parallel, 'Ω')} and C2 at its most",
        resistance=parallel * most,
        duration=duration,
        fraction=SETTLED,
    )
    sizing.fit("C2", exact, "bypass", low=exact / 10, high=exact)


def _capacitor_spread(request: LaserDriverRequest) -> float:
    """How far a bypass capacitor may lie above its value: tolerance and dielectric. [1]"""
    stock = request.preferred.bypass
    return float(stock.tolerance + max(DIELECTRICS[stock.dielectric].change_high, 0.0))


def _filter(sizing: _Sizing) -> None:
    """L1 and C3 by their corner, R8 across L1 for the damping."""
    request, derivation = sizing.request, sizing.derivation
    capacitance, inductance = sizing.known("C3", FILTER_CAPACITANCE), sizing.known("L1", FILTER_INDUCTANCE)
    derivation.compute(
        "filter corner", supply_filter.filter_corner, inductance=inductance, capacitance=capacitance,
        reason="below the frequencies of switching converters",
    )  # fmt: skip
    why = "common practice: corner at 16 kHz with {}, below switching converters; R7 keeps C3 from the laser"
    sizing.fit("C3", capacitance, "bypass", capacitance, capacitance, why.format("L1"))
    sizing.fit("L1", inductance, "inductors", inductance, inductance, why.format("C3"))
    least = inductance * (1 - request.preferred.inductors.tolerance)
    most = (capacitance + BYPASS) * (1 + _capacitor_spread(request))
    exact = derivation.compute(
        "R8", supply_filter.damping_resistance, reason=f"ζ ≥ {DAMPING} with L1 at its least, C3 and C8 at their most",
        inductance=least, capacitance=most, damping=DAMPING,
    )  # fmt: skip
    exact /= 1 + resistor_spread(request)
    sizing.fit("R8", exact, "resistors", low=0.9 * exact, high=exact)


def _compensation(sizing: _Sizing, bench: Bench) -> Fitted:
    """C1: the least that keeps the loop calm at every corner, the most that leaves it fast enough, and between them.

    Raises
    ------
    InfeasibleError : no C1 makes the loop stable.
    """
    request, series = sizing.request, sizing.request.preferred.capacitors.series
    if "C1" in request.fixed:
        sizing.derivation.note("C1", "fixed in the design file")
        return Fitted("C1", request.fixed["C1"], series, fixed=True)
    required = request.require.get("loop_bandwidth")
    wanted = (required.min or 0.0) if required is not None else 0.0
    start_bandwidth = wanted or bench.nominal("U1.gain_bandwidth") / 20
    start = driver_loop.compensation_capacitance(compensation_resistance=sizing["R4"], bandwidth=start_bandwidth)
    tried = float(start) * SCAN
    margin, peaking, bandwidth = _worst(sizing, bench, tried)
    calm = np.flatnonzero((margin >= _asked(request, "phase_margin", LEAST_MARGIN)) & (peaking <= _allowed(request)))
    if not (margin > 0).any():
        raise InfeasibleError(
            "no C1 makes the loop stable at every corner", ["U1 second pole higher", "Q1 input capacitance lower"]
        )
    quick = np.flatnonzero(bandwidth >= wanted)
    low = float(tried[calm[0]]) if len(calm) else inf
    high = (float(tried[quick[-1]]) if len(quick) else float(tried[0])) if wanted else inf
    tolerance = request.preferred.capacitors.tolerance
    low, high = low * (1 + tolerance), high / (1 + tolerance)
    if low == inf:
        aim = float(tried[int(np.argmax(margin))])
    else:
        aim = float(np.sqrt(low * high)) if high < inf else 2 * low
    edges = " … ".join(write(edge, "F") if np.isfinite(edge) else "open" for edge in (low, high))
    said = f"window over corners {edges}: calm below, {'fast enough' if wanted else 'nothing asked for'} above"
    if low > high:
        said += "; the window is empty"
    sizing.derivation.compute(
        "C1", driver_loop.compensation_capacitance, reason=said,
        compensation_resistance=sizing["R4"], bandwidth=1 / (2 * np.pi * sizing["R4"] * aim),
    )  # fmt: skip
    inside = low <= high
    return Fitted("C1", aim, series, low=max(low, aim / 1.3) if inside else 0.0, high=min(high, aim * 1.3) if inside else inf)


def _asked(request: LaserDriverRequest, name: str, otherwise: float) -> float:
    limit = request.require.get(name)
    return otherwise if limit is None or limit.min is None else max(limit.min, otherwise)


def _allowed(request: LaserDriverRequest) -> float:
    limit = request.require.get("peaking")
    return ALLOWED_PEAKING if limit is None or limit.max is None else limit.max


def _worst(sizing: _Sizing, bench: Bench, tried: Lanes) -> tuple[Lanes, Lanes, Lanes]:
    """Least phase margin, most peaking and least bandwidth over the corners of the loop, along the values of C1."""
    names = [name for name in DECIDES if isinstance(bench.limits.get(name), Limit) and bench.limits[name].varies]
    corners = [*product(*((bench.low(name), bench.high(name)) for name in names)), [bench.nominal(n) for n in names]]
    values = {ref: part.exact for ref, part in sizing.parts.items()}
    lanes = {name: np.repeat([corner[i] for corner in corners], len(tried)) for i, name in enumerate(names)}
    found = bench.evaluate({**values, **lanes, "C1": np.tile(tried, len(corners))})
    shape = (len(corners), len(tried))
    margin = np.nan_to_num(found["phase_margin"], nan=-inf).reshape(shape).min(axis=0)
    peaking = np.nan_to_num(found["peaking"], nan=inf).reshape(shape).max(axis=0)
    bandwidth = np.nan_to_num(found["loop_bandwidth"], nan=0.0).reshape(shape).min(axis=0)
    return margin, peaking, bandwidth
