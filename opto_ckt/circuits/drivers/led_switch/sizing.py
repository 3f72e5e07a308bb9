"""Exact values of the switched LED, each with its window."""

from __future__ import annotations

from math import inf, sqrt

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.led import heated, law_of, nominal
from opto_ckt.circuits.drivers.led_sizing import largest_current, least_resistance
from opto_ckt.circuits.drivers.led_switch.drive import DriveSizing
from opto_ckt.circuits.drivers.led_switch.limits import switch_current
from opto_ckt.circuits.drivers.led_switch.structure import is_peaked, peaking_gain
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, led, switching
from opto_ckt.request import LedSwitchRequest
from opto_ckt.units import write

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


class _Sizing(DriveSizing):
    """Parts in the order in which they are sized: LED and what is in series, the drive, what hastens them."""

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
        most = largest_current(self.request, switch_current(self.request))
        drop = self.bench.low("Q1.saturation_voltage") if self.bipolar else most * self.bench.low("Q1.on_resistance")
        voltage = self.bench.high("supply.positive")
        shunt = self.request.fixed.get("R5", self.forward / self.swept) if self.swept else inf
        return least_resistance(self.request, self.derivation, most, voltage, drop, shunt)

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

    def extras(self) -> None:
        """C1, R5 and R6, each where it is asked for."""
        signal = self.request.signal
        if signal.speed_up and self.bipolar:
            self.speed_up()
        if signal.sweep_out is not None:
            self.derivation.note("R5", f"draws {write(signal.sweep_out, 'A')} out of the LED at its forward voltage")
            self.fit("R5", self.forward / signal.sweep_out)
        if signal.pre_bias is not None:
            self._pre_bias(signal.pre_bias)

    def _pre_bias(self, wanted: float) -> None:
        """R6 lets a little current through while the switch is open.

        Raises
        ------
        InfeasibleError : the series resistance lets less through.
        """
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
        if whole <= series:
            raise InfeasibleError(
                f"a pre-bias of {write(wanted, 'A')} asks for {write(whole, 'Ω')} in all, the series resistance is"
                f" {write(series, 'Ω')} already",
                [f"signal.pre_bias below {write(wanted * whole / series, 'A')}"],
            )
        self.fit("R6", whole - series)
