"""Exact values of what drives the switch: base or gate, bleed or pull-down, speed-up capacitor."""

from __future__ import annotations

from math import inf

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.led import asked_current, heated, nominal
from opto_ckt.circuits.drivers.led_sizing import largest_current
from opto_ckt.circuits.drivers.led_switch.switch import time_constant
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.circuits.receivers.bipolar import DRIFT
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, switching
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.preferred import Series, neighbours
from opto_ckt.request import LedSwitchRequest
from opto_ckt.units import percent, write

FORCED_GAIN = 10.0  #: collector over base current of a sure switch, common practice [1]
OVERDRIVE = 2.0  #: least base drive over what saturates the least gain, common practice [1]
BLEED_SHARE = 0.1  #: of the base drive that the bleed takes, common practice
PULL_DOWN = 100e3  #: keeps a gate low while nothing drives it, common practice [Ω]
GATE_SHARE = 0.25  #: of the LED's rise time that the gate may take, common practice
LEAST_GATE = 10.0  #: damps the gate, common practice [Ω]


class DriveSizing:
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
        least = self._least_base(exact)
        self.fit("R2", exact, low=max(0.85 * exact, least), high=exact)
        bleed = junction / (BLEED_SHARE * collector / forced)
        self.derivation.note("R3", f"bleeds {percent(BLEED_SHARE)} of the base drive; common practice")
        self.fit("R3", bleed)

    def _least_base(self, most: float) -> float:
        """R2 whose current the logic output bears at its highest level, the base hot; 0 if no sheet limits it. [Ω]

        Raises
        ------
        InfeasibleError : the base needs a smaller one, or a smaller one is fixed.
        """
        limit = self.request.logic_output.current_max
        if limit is None:
            return 0.0
        warm = max(self.request.conditions.temperature.high - ROOM_TEMPERATURE, 0.0)
        over = self.bench.high("U1.high") - self.bench.low("Q1.base_emitter_voltage") - DRIFT * warm
        own, spread = self.bench.low("U1.source_resistance"), resistor_spread(self.request)
        least = max(over / limit - own, 0.0) / (1 - spread)
        asked = self.request.fixed.get("R2", most)
        if asked < least:
            drawn = over / (asked * (1 - spread) + own)
            raise InfeasibleError(
                f"R2 of {write(asked, 'Ω')} draws {write(drawn, 'A')} out of the logic output, its current_max is"
                f" {write(limit, 'A')}",
                [
                    f"logic_output.current_max above {write(drawn, 'A')}",
                    "a MOSFET, or a transistor of higher current_gain" if "R2" not in self.request.fixed
                    else f"fixed.R2 of at least {write(least, 'Ω')}",
                ],
            )  # fmt: skip
        return float(least)

    def speed_up(self) -> None:
        """C1 carries the stored charge away.

        Raises
        ------
        InfeasibleError : the transistor's sheet says nothing of its storage.
        """
        if "Q1.storage_time" not in self.bench.limits:
            raise InfeasibleError(
                "a speed-up capacitor is sized by transistor.storage_time", ["transistor.storage_time"]
            )
        constant = time_constant(self.bench.high("Q1.storage_time"), self.bench.low("Q1.current_gain"))
        level, junction = self.bench.nominal("U1.high"), self.bench.nominal("Q1.base_emitter_voltage")
        swing = level - junction
        base = swing / (self.parts["R2"].exact + self.bench.nominal("U1.source_resistance"))
        exact = self.derivation.compute(
            "C1",
            switching.storage_capacitance,
            reason="carries the charge of the saturated base away",
            base_current=base,
            time_constant=float(constant),
            swing=swing,
        )
        self.fit("C1", exact, low=exact, stock="capacitors")
