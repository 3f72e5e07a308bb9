"""Exact values of the pulse driver: capacitor and damping for peak and width together, then what serves them."""

from __future__ import annotations

from math import inf

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.laser_pulse.figures import safe_voltage
from opto_ckt.circuits.drivers.laser_pulse.shaping import Pulse, shaped, undamped_capacitance
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import discharge, laser
from opto_ckt.preferred import DIELECTRICS, neighbours
from opto_ckt.request import LaserPulseRequest
from opto_ckt.units import percent, write

RESERVOIR = 100.0  #: C2 over C1: the supply gives way by a hundredth in a pulse; common practice [1]
TURN_ON = 0.1  #: of the width, in which the gate is to be charged; common practice [1]
LEAST_GATE = 1.0  #: R4, against ringing of the gate; common practice [Ω]
PULL_DOWN = 10e3  #: R5; common practice [Ω]
BLEED_LEAST = 20.0  #: R2 over R1 [1]
FORMULAS = (
    discharge.damping_ratio,
    discharge.undamped_peak,
    discharge.damped_peak,
    discharge.pulse_width,
    discharge.storage_capacitance,
    discharge.loop_resistance,
    discharge.inductive_rise_time,
    discharge.charging_resistance,
    discharge.repetition_limit,
    discharge.charged_voltage,
    discharge.stored_energy,
    discharge.average_power,
    discharge.bleed_resistance,
    discharge.discharge_time,
    discharge.gate_resistance,
    discharge.turn_on_time,
    laser.current_for_power,
)


def propose(request: LaserPulseRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the switch does not stand it, or supply, inductance and resistances do not allow the pulse.
    """
    _refuse_unsuited(request, bench)
    sizing = _Sizing(request, derivation)
    capacitance = undamped_capacitance(request, bench)
    charging, bleed = _charging(sizing, bench, capacitance)
    for _ in range(3):  # what is not recharged in a period, and what the bleed takes, come off the supply
        charge = bench.nominal("supply.positive") * _reached(bench, capacitance, charging, bleed)
        pulse = shaped(request, derivation, bench, charge)
        capacitance = pulse.capacitance
        charging, bleed = _charging(sizing, bench, capacitance)
    _explained(derivation, bench, pulse)
    sizing.fit("C1", pulse.capacitance, "capacitors", pulse.capacitance / 1.2, pulse.capacitance * 1.2)
    sizing.fit("R3", pulse.damping_resistance, "resistors", pulse.damping_resistance / 1.3,
               pulse.damping_resistance * 1.3)  # fmt: skip
    sizing.fit("R1", charging, "resistors", 0.85 * charging, charging)
    sizing.fit("R2", bleed, "resistors", bleed / 2, bleed)
    reservoir = _reservoir(request, pulse.capacitance)
    why = f"common practice: {RESERVOIR:g} times C1, so that a pulse takes {percent(1 / RESERVOIR)} of its voltage"
    sizing.fit("C2", reservoir, "bypass", reservoir, reservoir, why)
    _gate(sizing, bench)
    return tuple(sizing.parts.values())


class _Sizing:
    """Parts in the order in which they are sized; what the design file fixes is kept."""

    def __init__(self, request: LaserPulseRequest, derivation: Derivation) -> None:
        self.request, self.derivation = request, derivation
        self.parts: dict[str, Fitted] = {}

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


def _refuse_unsuited(request: LaserPulseRequest, bench: Bench) -> None:
    """Refuse a switch that supply or driver break, that the driver does not turn on, or that the peak is too much for.

    Raises
    ------
    InfeasibleError : one of them.
    """
    data, supply, drive = request.transistor, bench.high("supply.positive"), bench.high("U1.high")
    if supply > data.voltage_max:
        raise InfeasibleError(
            f"the supply reaches {write(supply, 'V')}, voltage_max of the transistor is {write(data.voltage_max, 'V')}",
            [f"transistor.voltage_max ≥ {write(supply, 'V')}", "a lower conditions.supply.positive"],
        )
    if drive > data.gate_voltage_max:
        limit = write(data.gate_voltage_max, "V")
        raise InfeasibleError(
            f"the gate driver reaches {write(drive, 'V')}, gate_voltage_max of the transistor is {limit}",
            [f"transistor.gate_voltage_max ≥ {write(drive, 'V')}", f"logic_output.high ≤ {limit}"],
        )
    least, threshold = bench.low("U1.high"), bench.high("Q1.threshold_voltage")
    if least <= threshold:
        raise InfeasibleError(
            f"the gate driver gives {write(least, 'V')}, the transistor turns on from {write(threshold, 'V')}",
            [f"logic_output.high > {write(threshold, 'V')}", f"transistor.threshold_voltage < {write(least, 'V')}"],
        )


def _charging(sizing: _Sizing, bench: Bench, capacitance: float) -> tuple[float, float]:
    """R1 for the highest rate with C1 at its most; R2 for the time after power-off. [Ω]

    Raises
    ------
    InfeasibleError : a bleed so quick would take the supply.
    """
    request, derivation = sizing.request, sizing.derivation
    most = capacitance * (1 + request.preferred.capacitors.tolerance) * 1.01
    rate, spread = bench.high("signal.repetition_rate"), 1 + resistor_spread(request)
    charging = derivation.compute(
        "R1", discharge.charging_resistance,
        reason=f"five time constants in a period of {write(1 / rate, 's')}, C1 and R1 at their most",
        capacitance=most, repetition_rate=rate,
    ) / spread  # fmt: skip
    charging = request.fixed.get("R1", charging)
    supply, duration = bench.high("supply.positive"), request.conditions.discharge_time
    safe = float(safe_voltage(request, supply))
    whole = most + _reservoir(request, capacitance) * (1 + _bypass_spread(request))
    bleed = derivation.compute(
        "R2", discharge.bleed_resistance,
        reason=f"C1 and C2 from {write(supply, 'V')} to {write(safe, 'V')} in {write(duration, 's')}, both at their"
        " most, through R1 and R2",
        duration=duration, capacitance=whole, voltage=supply, safe_voltage=safe,
    ) / spread - charging  # fmt: skip
    bleed = request.fixed.get("R2", bleed)
    if bleed < BLEED_LEAST * charging and "R2" not in request.fixed:
        longer = duration * (BLEED_LEAST + 1) * charging / (bleed + charging)
        raise InfeasibleError(
            f"a bleed that discharges C1 and C2 within {write(duration, 's')} is {write(max(bleed, 0.0), 'Ω')}, less"
            f" than {BLEED_LEAST:g} times R1, {write(charging, 'Ω')}: it would take the supply",
            [f"conditions.discharge_time ≥ {write(longer, 's')}", "a higher signal.repetition_rate lowers R1"],
        )
    return charging, bleed


def _reached(bench: Bench, capacitance: float, charging: float, bleed: float) -> float:
    """Share of the supply that C1 is charged to at the nominal rate. [1]"""
    return float(
        discharge.charged_voltage(
            supply=bleed / (charging + bleed),
            resistance=charging * bleed / (charging + bleed),
            capacitance=capacitance,
            repetition_rate=bench.nominal("signal.repetition_rate"),
        )
    )


def _reservoir(request: LaserPulseRequest, capacitance: float) -> float:
    """C2: the next value of its series from a hundred times C1 on. [F]"""
    wanted = RESERVOIR * capacitance
    fixed = request.fixed.get("C2")
    near = neighbours(wanted, request.preferred.bypass.series, 1, wanted, inf)
    return fixed if fixed is not None else next(iter(near), wanted)


def _bypass_spread(request: LaserPulseRequest) -> float:
    """How far C2 may lie above its value. [1]"""
    stock = request.preferred.bypass
    return float(stock.tolerance + max(DIELECTRICS[stock.dielectric].change_high, 0.0))


def _gate(sizing: _Sizing, bench: Bench) -> None:
    """R4: as large as the turn-on allows, no smaller than the driver's current asks for; R5 keeps the gate low."""
    request, derivation = sizing.request, sizing.derivation
    duration, least, bound = TURN_ON * request.signal.pulse_width.nominal, LEAST_GATE, "common practice"
    driver = request.logic_output
    if driver.current_max is not None:
        own = bench.high("U1.high") / driver.current_max - bench.low("U1.source_resistance")
        own /= 1 - resistor_spread(request)
        least, bound = max((least, bound), (own, f"the driver's {write(driver.current_max, 'A')}"))
    exact = derivation.compute(
        "R4", discharge.gate_resistance,
        reason=f"gate charged in {write(duration, 's')}, {percent(TURN_ON)} of the width, the driver's resistance taken"
        " off; the least gate drive and the largest charge",
        duration=duration, gate_charge=bench.high("Q1.gate_charge"), drive=bench.low("U1.high"),
        plateau=bench.high("Q1.threshold_voltage"),
    ) - bench.high("U1.source_resistance")  # fmt: skip
    if exact < least:
        derivation.note("R4", f"{write(least, 'Ω')} for {bound}; the gate is then slower than {write(duration, 's')}")
        exact = least
    sizing.fit("R4", exact, "resistors", low=max(least, 0.8 * exact), high=max(exact, 1.05 * least))
    sizing.fit("R5", PULL_DOWN, "resistors", PULL_DOWN, PULL_DOWN, "common practice: off while nothing drives the gate")


def _explained(derivation: Derivation, bench: Bench, pulse: Pulse) -> None:
    """The rules of thumb beside the exact pulse, so that whoever checks by hand finds them."""
    stray, capacitance = bench.nominal("LS"), pulse.capacitance
    derivation.compute(
        "peak without damping", discharge.undamped_peak, reason="more than any damping leaves",
        voltage=pulse.voltage, inductance=stray, capacitance=capacitance,
    )  # fmt: skip
    if pulse.damping < 1:
        derivation.compute(
            "peak", discharge.damped_peak, reason=f"ζ = {pulse.damping:.2f}",
            voltage=pulse.voltage, resistance=pulse.resistance, inductance=stray, capacitance=capacitance,
        )  # fmt: skip
    derivation.compute(
        "width without damping", discharge.pulse_width,
        reason=f"exact, by solving: {write(pulse.width, 's')}", inductance=stray, capacitance=capacitance,
    )  # fmt: skip
    derivation.compute(
        "least rise time", discharge.inductive_rise_time, reason="floor: the whole voltage across the inductance",
        inductance=stray, current=pulse.current, voltage=pulse.voltage,
    )  # fmt: skip
    rate = bench.high("signal.repetition_rate")
    charge = pulse.voltage + pulse.turn_on
    derivation.compute(
        "average power of the discharges", discharge.average_power, reason=f"at {write(rate, 'Hz')}",
        capacitance=capacitance, voltage=charge, repetition_rate=rate,
    )  # fmt: skip
