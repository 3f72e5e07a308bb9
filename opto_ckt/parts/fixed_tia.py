"""Data of a transimpedance amplifier that is bought whole."""

from __future__ import annotations

from typing import Annotated, ClassVar

from opto_ckt.parts.record import Assumed, Choice, Record, Sheet, Spread, Unit


class FixedTiaData(Record):
    """Transimpedance amplifier with its feedback inside; figures hold at 25 °C."""

    section: ClassVar[str] = "fixed_tia"

    transimpedance: Annotated[Spread, Unit("Ω", "10 kΩ"), Assumed(0.2, 0.2), Sheet("transimpedance gain, V/A")]
    bandwidth: Annotated[
        Spread, Unit("Hz", "150 MHz"), Assumed(0.2, 0.2), Sheet("small-signal bandwidth, -3 dB electrical")
    ]
    low_cutoff: Annotated[Spread | None, Unit("Hz", "30 kHz"), Assumed(0.3, 0.3), Sheet("low-frequency cut-off")] = None
    input_noise_density: Annotated[
        Spread | None, Unit("A/√Hz", "2 pA/√Hz"), Assumed(0.0, 0.25), Sheet("input-referred noise density")
    ] = None
    input_noise: Annotated[
        Spread | None, Unit("A", "30 nA"), Assumed(0.0, 0.25), Sheet("input-referred noise, rms in band")
    ] = None
    input_capacitance_max: Annotated[float, Unit("F", "1 pF"), Sheet("source capacitance for which the figures hold")]
    overload_current: Annotated[Spread, Unit("A", "1 mA"), Assumed(0.2, 0.0), Sheet("input overload, peak to peak")]
    output_resistance: Annotated[Spread, Unit("Ω", "50 Ω"), Assumed(0.2, 0.2), Sheet("single-ended output impedance")]
    quiescent_current: Annotated[Spread | None, Unit("A", "30 mA"), Assumed(0.2, 0.2), Sheet("supply current, ICC")] = (
        None
    )
    supply_min: Annotated[float | None, Unit("V", "3 V"), Sheet("operating supply voltage, least")] = None
    supply_max: Annotated[float | None, Unit("V", "3.6 V"), Sheet("operating supply voltage, most")] = None

    choices = (Choice("the noise", (("input_noise_density",), ("input_noise",))),)
