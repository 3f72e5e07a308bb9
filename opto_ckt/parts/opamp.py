"""Data of a voltage-feedback operational amplifier."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.parts.record import Assumed, Check, Finding, Record, Sheet, Spread, Unit
from opto_ckt.units import write


def _supply_in_order(least: float, most: float) -> Iterator[Finding]:
    if least > most:
        yield Finding(("supply_min",), f"supply_min {write(least, 'V')} is above supply_max {write(most, 'V')}")


class OpAmpData(Record):
    """Voltage-feedback operational amplifier; figures hold at 25 °C and under `conditions`."""

    section: ClassVar[str] = "opamp"

    gain_bandwidth: Annotated[
        Spread,
        Unit("Hz", "230 MHz"),
        Assumed(0.3, 0.3),
        Sheet("gain-bandwidth product, GBW, GBP, unity-gain frequency"),
    ]
    second_pole: Annotated[
        Spread | None,
        Unit("Hz", "400 MHz"),
        Assumed(0.3, 0.3),
        Sheet("from the phase of the open-loop gain: 45° more lag"),
    ] = None
    open_loop_gain: Annotated[
        Spread, Unit("V/V", "100 dB"), Assumed(0.5, 1.0), Sheet("open-loop or large-signal voltage gain, AOL, AVOL")
    ]
    common_capacitance: Annotated[
        Spread, Unit("F", "1.5 pF", "not negative"), Assumed(0.2, 0.2), Sheet("common-mode input capacitance, CCM")
    ]
    differential_capacitance: Annotated[
        Spread, Unit("F", "0.5 pF", "not negative"), Assumed(0.2, 0.2), Sheet("differential input capacitance, CDIFF")
    ]
    voltage_noise: Annotated[
        Spread, Unit("V/√Hz", "6 nV/√Hz"), Assumed(0.0, 0.25), Sheet("input voltage noise density, en")
    ]
    voltage_noise_corner: Annotated[
        Spread | None,
        Unit("Hz", "1 kHz"),
        Assumed(0.0, 1.0),
        Sheet("1/f corner of en: where it is 1.41 times the flat part"),
    ] = None
    current_noise: Annotated[
        Spread,
        Unit("A/√Hz", "1.3 fA/√Hz", "not negative"),
        Assumed(0.0, 0.25),
        Sheet("input current noise density, in"),
    ]
    current_noise_corner: Annotated[
        Spread | None, Unit("Hz", "1 kHz"), Assumed(0.0, 1.0), Sheet("1/f corner of in")
    ] = None
    output_resistance: Annotated[
        Spread | None, Unit("Ω", "30 Ω"), Assumed(0.3, 0.3), Sheet("open-loop output impedance, ZO, RO")
    ] = None
    offset_voltage: Annotated[
        Spread,
        Unit("V", "0.2 mV", "not negative"),
        Assumed(0.0, 2.0),
        Sheet("input offset voltage, VOS, without its sign"),
    ]
    offset_drift: Annotated[
        Spread | None, Unit("V/K", "2 µV/K", "not negative"), Assumed(0.0, 2.0), Sheet("offset drift, dVOS/dT, TCVOS")
    ] = None
    bias_current: Annotated[
        Spread, Unit("A", "2 pA", "not negative"), Assumed(0.0, 2.0), Sheet("input bias current, IB, without its sign")
    ]
    bias_current_doubling: Annotated[
        float | None, Unit("K", "10 K"), Sheet("FET input: temperature for twice IB; left out, IB does not change")
    ] = None
    slew_rate: Annotated[Spread, Unit("V/s", "290 V/µs"), Assumed(0.3, 0.3), Sheet("slew rate, SR")]
    swing_to_positive: Annotated[
        Spread, Unit("V", "1.2 V", "not negative"), Assumed(0.2, 0.2), Sheet("output swing high, VOH: distance to V+")
    ]
    swing_to_negative: Annotated[
        Spread, Unit("V", "1.2 V", "not negative"), Assumed(0.2, 0.2), Sheet("output swing low, VOL: distance to V-")
    ]
    common_mode_to_positive: Annotated[
        Spread | None,
        Unit("V", "2 V", "any"),
        Assumed(0.2, 0.2),
        Sheet("common-mode range: distance to V+, below zero beyond it"),
    ] = None
    common_mode_to_negative: Annotated[
        Spread | None,
        Unit("V", "0 V", "any"),
        Assumed(0.2, 0.2),
        Sheet("common-mode range: distance to V-, below zero beyond it"),
    ] = None
    output_current_max: Annotated[Spread, Unit("A", "40 mA"), Assumed(0.3, 0.0), Sheet("output current, linear, IO")]
    quiescent_current: Annotated[
        Spread, Unit("A", "14 mA"), Assumed(0.2, 0.2), Sheet("supply current per amplifier, IQ, IS")
    ]
    supply_min: Annotated[float, Unit("V", "4.5 V"), Sheet("operating supply voltage, V+ to V-, least")]
    supply_max: Annotated[float, Unit("V", "12.6 V"), Sheet("operating supply voltage, V+ to V-, most")]
    minimum_stable_gain: Annotated[Spread, Unit("V/V", "1"), Sheet("stable for gains of, decompensated")] = Spread(
        typ=1.0
    )
    supply_rejection: Annotated[Spread | None, Unit("dB", "80 dB", "any"), Sheet("PSRR at dc")] = None
    junction_to_ambient: Annotated[Spread | None, Unit("K/W", "150 K/W"), Sheet("θJA, junction to ambient")] = None
    junction_max: Annotated[float, Unit("°C", "150 °C", "any"), Sheet("maximum junction temperature")] = (
        150 + ZERO_CELSIUS
    )

    checks = (Check(("supply_min", "supply_max"), _supply_in_order),)
