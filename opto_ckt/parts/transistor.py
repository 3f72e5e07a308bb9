"""Data of transistors; voltages and currents are magnitudes, the kind says the polarity."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar, Literal

from opto_ckt.parts.record import Assumed, Check, Finding, Record, Sheet, Spread, Unit


def _heat_leaves(case: Spread | None, ambient: Spread | None) -> Iterator[Finding]:
    if case is None and ambient is None:
        yield Finding((), "a thermal resistance is missing; give junction_to_case, junction_to_ambient or both")


class TransistorData(Record):
    """What the sheets of all transistors have."""

    section: ClassVar[str] = "transistor"

    current_max: Annotated[float, Unit("A", "1 A"), Sheet("absolute maximum collector or drain current")]
    voltage_max: Annotated[float, Unit("V", "40 V"), Sheet("absolute maximum VCEO or VDS")]
    power_max: Annotated[float, Unit("W", "0.5 W"), Sheet("total dissipation at 25 °C, Ptot, PD")]
    power_max_at: Annotated[Literal["case", "ambient"], Sheet("total dissipation: at Tcase or at Tamb = 25 °C")]
    junction_to_case: Annotated[Spread | None, Unit("K/W", "80 K/W"), Sheet("RθJC, Rth(j-c), junction to case")] = None
    junction_to_ambient: Annotated[
        Spread | None, Unit("K/W", "250 K/W"), Sheet("RθJA, Rth(j-a), junction to ambient")
    ] = None
    junction_max: Annotated[float, Unit("°C", "150 °C", "any"), Sheet("maximum junction temperature")]

    checks = (Check(("junction_to_case", "junction_to_ambient"), _heat_leaves),)


class BipolarData(TransistorData):
    """Bipolar transistor; figures hold at 25 °C and the current of the design."""

    kind: Annotated[Literal["npn", "pnp"], Sheet("polarity")]
    current_gain: Annotated[Spread, Unit("1", "150"), Assumed(0.5, 1.0), Sheet("dc current gain, hFE")]
    base_emitter_voltage: Annotated[Spread, Unit("V", "0.7 V"), Assumed(0.1, 0.1), Sheet("base-emitter voltage, VBE")]
    saturation_voltage: Annotated[Spread, Unit("V", "0.2 V"), Assumed(0.5, 0.5), Sheet("saturation voltage, VCE(sat)")]
    transition_frequency: Annotated[Spread, Unit("Hz", "250 MHz"), Assumed(0.3, 0.3), Sheet("transition frequency, fT")]
    collector_capacitance: Annotated[Spread, Unit("F", "4 pF"), Assumed(0.2, 0.2), Sheet("output capacitance, Cob, Cc")]
    base_resistance: Annotated[Spread | None, Unit("Ω", "10 Ω"), Assumed(0.5, 0.5), Sheet("base resistance, rbb'")] = (
        None
    )
    storage_time: Annotated[Spread | None, Unit("s", "200 ns"), Assumed(0.3, 0.3), Sheet("storage time, ts")] = None


class MosfetData(TransistorData):
    """Enhancement field-effect transistor with insulated gate; figures hold at 25 °C."""

    kind: Annotated[Literal["nmos", "pmos"], Sheet("channel")]
    threshold_voltage: Annotated[
        Spread, Unit("V", "1.5 V"), Assumed(0.3, 0.3), Sheet("gate threshold voltage, VGS(th)")
    ]
    transconductance: Annotated[
        Spread, Unit("A/V", "0.5 A/V"), Assumed(0.3, 0.3), Sheet("forward transconductance, gfs")
    ]
    transconductance_current: Annotated[float, Unit("A", "0.2 A"), Sheet("at ID =")]
    on_resistance: Annotated[Spread, Unit("Ω", "1 Ω"), Assumed(0.3, 0.3), Sheet("on-state resistance, RDS(on)")]
    on_resistance_gate: Annotated[float, Unit("V", "4.5 V"), Sheet("at VGS =")]
    input_capacitance: Annotated[Spread, Unit("F", "50 pF"), Assumed(0.2, 0.2), Sheet("input capacitance, Ciss")]
    reverse_capacitance: Annotated[
        Spread, Unit("F", "5 pF"), Assumed(0.2, 0.2), Sheet("reverse transfer capacitance, Crss")
    ]
    output_capacitance: Annotated[
        Spread | None, Unit("F", "20 pF"), Assumed(0.2, 0.2), Sheet("output capacitance, Coss")
    ] = None
    gate_charge: Annotated[Spread, Unit("C", "1 nC"), Assumed(0.3, 0.3), Sheet("total gate charge, Qg")]
    gate_voltage_max: Annotated[float, Unit("V", "20 V"), Sheet("absolute maximum gate-source voltage")]
    pulse_current_max: Annotated[float | None, Unit("A", "10 A"), Sheet("pulsed drain current, most, IDM")] = None
    inductance: Annotated[Spread | None, Unit("H", "1 nH"), Sheet("package inductance, drain to source")] = None


class JfetData(TransistorData):
    """Junction field-effect transistor; figures hold at 25 °C."""

    kind: Annotated[Literal["njf", "pjf"], Sheet("channel")]
    saturation_current: Annotated[
        Spread, Unit("A", "10 mA"), Assumed(0.5, 1.0), Sheet("drain current at VGS = 0, IDSS")
    ]
    pinch_off_voltage: Annotated[
        Spread, Unit("V", "2 V"), Assumed(0.5, 0.5), Sheet("gate-source cut-off voltage, VGS(off), Vp")
    ]
    gate_source_capacitance: Annotated[Spread, Unit("F", "10 pF"), Assumed(0.2, 0.2), Sheet("Cgs = Ciss - Crss")]
    gate_drain_capacitance: Annotated[Spread, Unit("F", "3 pF"), Assumed(0.2, 0.2), Sheet("Cgd = Crss")]
    voltage_noise: Annotated[Spread, Unit("V/√Hz", "1 nV/√Hz"), Assumed(0.0, 0.25), Sheet("equivalent input noise, en")]
    gate_current: Annotated[
        Spread | None, Unit("A", "10 pA", "not negative"), Assumed(0.0, 4.0), Sheet("gate reverse current, IGSS")
    ] = None
    gate_current_doubling: Annotated[float, Unit("K", "10 K"), Sheet("temperature for twice the gate current")] = 10.0
