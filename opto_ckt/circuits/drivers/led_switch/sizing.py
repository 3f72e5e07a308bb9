"""Exact values of the switched LED, each with its window."""

from __future__ import annotations

from math import inf, sqrt

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.led import asked_current, heated, law_of, nominal
from opto_ckt.circuits.drivers.led_sizing import largest_current, least_resistance
from opto_ckt.circuits.drivers.led_switch.structure import is_peaked, peaking_gain
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, led, switching
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.preferred import Series, neighbours
from opto_ckt.request import LedSwitchRequest
from opto_ckt.units import percent, write

FORMULAS = (
    driver.series_resistance,
    driver.base_resistance,
    switching.peaked_share,
    switching.peaking_capacitance,
    switching.storage_delay,
    switching.storage_capacitance,
    switching.sweep_out_time,
    switching.recovery_frequency,
    switching.settled_frequency,
    led.electrical_bandwidth,
    led.optical_bandwidth,
)
FORCED_GAIN = 10.0  #: collector over base current of a sure switch, common practice [1]
OVERDRIVE = 2.0  #: least base drive over what saturates the least gain, common practice [1]
BLEED_SHARE = 0.1  #: of the base drive that the bleed takes, common practice
PULL_DOWN = 100e3  #: keeps a gate low while nothing drives it, common practice [Ω]
GATE_SHARE = 0.25  #: of the LED's rise time that the gate may take, common practice
LEAST_GATE = 10.0  #: damps the gate, common practice [Ω]
SPARE = 1.15  #: peaking beyond the bandwidth asked for: capacitances of LED and stray ends take their part


def propose(request: LedSwitchRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : supply, LED or switch leave no resistance, or less than the peaking needs.
    """
    sizing = _Sizing(request, derivation, bench)
    sizing.series()
    sizing.drive()
    sizing.extras()
    return tuple(sizing.parts.values())


class _Sizing:
    """Parts in the order in which they are sized; what the design file fixes is kept."""

    def __init__(self, request: LedSwitchRequest, derivation: Derivation, bench: Bench) -> None:
        self.request, self.derivation, self.bench = request, derivation, bench
        self.current = asked_current(request)
        self.bipolar = isinstance(request.transistor, BipolarData)
        voltage, junction = heated(nominal(request), request, self.current)
        self.forward, self.junction = float(voltage), float(junction)
        self.swept = request.signal.sweep_out or 0.0
        self.parts: dict[str, Fitted] = {}

    def fit(self, ref: str, exact: float, low: float = 0.0, high: float = inf, stock: str = "resistors") -> None:
        """One part in its window; where the window holds none of its series, the two values next to it."""
        series: Series = getattr(self.request.preferred, stock).series
        fixed = self.request.fixed.get(ref)
        if fixed is not None:
            self.derivation.note(ref, "fixed in the design file")
            self.parts[ref] = Fitted(ref, fixed, series, fixed=True)
            return
        near = neighbours(exact, series, 2, low, high) or neighbours(exact, series, 1, 0.0, inf)
        self.parts[ref] = Fitted(ref, exact, series, low=min(near), high=max(near))

    def series(self) -> None:
        """R1, and with a peaked current R4 and C2: what the supply leaves at the current, shared out."""
        voltage = self.bench.nominal("supply.positive")
        drop = self.bench.nominal("Q1.saturation_voltage") if self.bipolar else 0.0
        channel = 0.0 if self.bipolar else self.bench.nominal("Q1.on_resistance")
        total = self.current + self.swept
        left = voltage - drop - self.forward - total * channel
        if left <= 0:
            raise InfeasibleError(
                f"{write(voltage, 'V')} leaves nothing for a resistor: at {write(self.current, 'A')} the LED takes"
                f" {write(self.forward, 'V')}, the switch {write(drop + total * channel, 'V')}",
                [
                    f"conditions.supply.positive above {write(voltage - left, 'V')}",
                    f"signal.current below {write(self.current, 'A')}",
                ],
            )
        exact = self.derivation.compute(
            "series resistance",
            driver.series_resistance,
            reason=f"{write(total, 'A')}, forward voltage at the LED's {write(self.current, 'A')}, junction at"
            f" {write(self.junction, '°C')}",
            supply=voltage,
            switch_drop=drop + total * channel,
            forward_voltage=self.forward,
            current=total,
        )
        least = self._least()
        exact = max(exact, least)
        if is_peaked(self.request):
            self._peaked(exact, channel)
        else:
            self.derivation.note("R1", f"series resistance; at least {write(least, 'Ω')}, the largest current in mind")
            self.fit("R1", exact, low=least)

    def _least(self) -> float:
        """Series resistance that keeps the largest current at the worst corner. [Ω]"""
        most = largest_current(self.request)
        drop = self.bench.low("Q1.saturation_voltage") if self.bipolar else most * self.bench.low("Q1.on_resistance")
        voltage = self.bench.high("supply.positive")
        return least_resistance(self.request, self.derivation, most, voltage, drop)

    def _peaked(self, whole: float, channel: float) -> None:
        """R1 and R4 share the series resistance, C2 lies across R4: zero on the LED's pole.

        Raises
        ------
        InfeasibleError : switch and LED alone have more than the share that peaking leaves.
        """
        gain = peaking_gain(self.request) * SPARE
        law = law_of(self.request.source)
        thermal = law.emission * BOLTZMANN * self.junction / ELEMENTARY_CHARGE
        own = channel + law.series_resistance + thermal / self.current
        bypassed = self.derivation.compute(
            "R4",
            switching.peaked_share,
            reason=f"{gain:.2f} times the bandwidth of the slowest LED; {write(own, 'Ω')} are switch and LED",
            resistance=whole + own,
            gain=max(gain, 1.01),
        )
        first = whole - bypassed
        if first <= 0:
            reach = (whole + own) / own / SPARE
            raise InfeasibleError(
                f"peaking by {gain:.2f} leaves no R1: switch and LED themselves have {write(own, 'Ω')} of the"
                f" {write(whole + own, 'Ω')}",
                [
                    f"require.bandwidth.min at most {reach / peaking_gain(self.request):.2f} times that asked for",
                    "a higher conditions.supply.positive, which leaves more resistance",
                    "a faster LED",
                ],
            )
        self.derivation.note("R1", f"what R4 leaves of {write(whole, 'Ω')}")
        self.fit("R1", first)
        self.fit("R4", bypassed)
        lifetime = sqrt(self.bench.low("D1.lifetime") * self.bench.high("D1.lifetime"))
        capacitance = self.derivation.compute(
            "C2",
            switching.peaking_capacitance,
            reason=f"its zero on the pole of a lifetime in the middle, {write(lifetime, 's')}",
            lifetime=lifetime,
            bypassed=self.parts["R4"].exact,
        )
        self.fit("C2", capacitance, stock="capacitors")

    def drive(self) -> None:
        """R2 and R3: the base driven well into saturation, or the gate damped and held low."""
        if self.bipolar:
            self._base()
            return
        quick = 2.197 * self.bench.nominal("D1.lifetime") * GATE_SHARE
        charge = self.bench.high("Q1.input_capacitance")
        exact = max(quick / (2.2 * charge) - self.bench.nominal("U1.source_resistance"), LEAST_GATE)
        self.derivation.note(
            "R2", f"charges {write(charge, 'F')} in {write(quick, 's')}, a quarter of the LED's rise; common practice"
        )
        self.fit("R2", exact, high=1.3 * exact)
        self.derivation.note("R3", "common practice: the switch stays open while nothing drives it")
        self.fit("R3", PULL_DOWN)

    def _base(self) -> None:
        """Base current for a forced gain, the bleed's share on top, at the least drive.

        Raises
        ------
        InfeasibleError : the logic output does not reach the base-emitter voltage with anything to spare.
        """
        least_gain = self.bench.low("Q1.current_gain")
        forced = min(FORCED_GAIN, least_gain / OVERDRIVE)
        level, junction = self.bench.low("U1.high"), self.bench.high("Q1.base_emitter_voltage")
        if level <= junction:
            raise InfeasibleError(
                f"the logic output's {write(level, 'V')} does not reach the transistor's {write(junction, 'V')}",
                ["a logic_output with a higher level", "a MOSFET of low threshold"],
            )
        collector = largest_current(self.request) + self.swept
        whole = self.derivation.compute(
            "R2",
            driver.base_resistance,
            reason=f"forced gain {forced:.3g} at {write(collector, 'A')}, {percent(BLEED_SHARE)} more for R3, the"
            " output's own resistance off it",
            drive=level,
            base_emitter_voltage=junction,
            collector_current=collector * (1 + BLEED_SHARE),
            forced_gain=forced,
        )
        exact = whole - self.bench.high("U1.source_resistance")
        if exact <= 0:
            raise InfeasibleError(
                f"the logic output's own {write(self.bench.high('U1.source_resistance'), 'Ω')} leaves too little base"
                f" current for {write(collector, 'A')}",
                ["a stronger logic_output", "a transistor of higher current_gain, or a MOSFET"],
            )
        self.fit("R2", exact, low=0.85 * exact, high=exact)
        bleed = junction / (BLEED_SHARE * collector / forced)
        self.derivation.note("R3", f"bleeds {percent(BLEED_SHARE)} of the base drive; common practice")
        self.fit("R3", bleed)

    def extras(self) -> None:
        """C1, R5 and R6, each where it is asked for."""
        signal = self.request.signal
        if signal.speed_up and self.bipolar:
            self._speed_up()
        if signal.sweep_out is not None:
            self.derivation.note("R5", f"draws {write(signal.sweep_out, 'A')} out of the LED at its forward voltage")
            self.fit("R5", self.forward / signal.sweep_out)
        if signal.pre_bias is not None:
            self._pre_bias(signal.pre_bias)

    def _speed_up(self) -> None:
        """C1 carries the stored charge away.

        Raises
        ------
        InfeasibleError : the transistor's sheet says nothing of its storage.
        """
        if "Q1.storage_time" not in self.bench.limits:
            raise InfeasibleError(
                "a speed-up capacitor is sized by transistor.storage_time", ["transistor.storage_time"]
            )
        level, junction = self.bench.nominal("U1.high"), self.bench.nominal("Q1.base_emitter_voltage")
        swing = level - junction
        base = swing / (self.parts["R2"].exact + self.bench.nominal("U1.source_resistance"))
        exact = self.derivation.compute(
            "C1",
            switching.storage_capacitance,
            reason="carries the charge of the saturated base away",
            base_current=base,
            time_constant=self.bench.high("Q1.storage_time"),
            swing=swing,
        )
        self.fit("C1", exact, low=exact, stock="capacitors")

    def _pre_bias(self, wanted: float) -> None:
        """R6 lets a little current through while the switch is open."""
        voltage, _ = heated(nominal(self.request), self.request, wanted)
        shunted = 0.0 if "R5" not in self.parts else float(voltage) / self.parts["R5"].exact
        whole = self.derivation.compute(
            "R6",
            driver.series_resistance,
            reason=f"{write(wanted, 'A')} through the LED while off, the series resistance off it",
            supply=self.bench.nominal("supply.positive"),
            switch_drop=0.0,
            forward_voltage=float(voltage),
            current=wanted + shunted,
        )
        series = self.parts["R1"].exact + (self.parts["R4"].exact if "R4" in self.parts else 0.0)
        self.fit("R6", whole - series)
