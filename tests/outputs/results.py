"""Results put together by hand, small enough to know every number of them."""

from __future__ import annotations

from dataclasses import replace
from math import nan
from typing import Any

from opto_ckt.derivation import Derivation
from opto_ckt.formulas.transimpedance import feedback_resistance
from opto_ckt.limits import Limit, Requirement
from opto_ckt.result import (
    DesignHead,
    FoundFault,
    FoundFigure,
    FoundHeat,
    FoundNoise,
    FoundPart,
    FoundRequirement,
    Result,
    Rounding,
)
from opto_ckt.topology import GROUND, Capacitor, OpAmp, Photodiode, Resistor, Topology

HEAD = DesignHead("Valley receiver", "A", "tia", "transimpedance amplifier", f"sha256:{'0' * 64}", "valley")
R1 = FoundPart(
    ref="R1", kind="resistor", role="feedback", unit="Ω", exact=24.5e3, value=24.3e3, tolerance=0.01,
    absolute_tolerance=None, characteristic="100 ppm/K", size="0603", part="", stress={"power": 1.6e-4, "voltage": 2.0},
    required_rating={"power": 3.3e-4, "voltage": 2.0}, formula="2.00 V / 81.6 µA", source="Ohm's law",
)  # fmt: skip
C1 = FoundPart(
    ref="C1", kind="capacitor", role="feedback", unit="F", exact=0.35e-12, value=0.36e-12, tolerance=None,
    absolute_tolerance=0.1e-12, characteristic="C0G", size="0603", part="", stress={"voltage": 2.0},
    required_rating={"voltage": 4.0}, formula="flat response", source="derived",
)  # fmt: skip
U1 = FoundPart(
    ref="U1", kind="op amp", role="amplifier", unit="", exact=None, value=None, tolerance=None,
    absolute_tolerance=None, characteristic="", size="", part="HB-OA-400", stress={"voltage": 10.5},
    required_rating={"voltage": 10.5}, formula="named in the design file", source="",
)  # fmt: skip
MISSED = FoundRequirement(
    Requirement("peaking", "max", 0.5, 0.5), 0.02, 0.71, {"U1.gain_bandwidth": "high", "C1": "low"}, "dB",
    ("U1 gain bandwidth ≥ 310 MHz", "R1 ≤ 22 kΩ"),
)  # fmt: skip
MET = FoundRequirement(
    Requirement("bandwidth", "min", 8e6, 1.0), 9.31e6, 8.49e6, {"U1.gain_bandwidth": "low", "temperature": "high"}, "Hz"
)
VALUES = {
    "R1": 24e3,
    "C1": 0.4e-12,
    "CB": 0.3e-12,
    "temperature": 298.15,
    "D1.responsivity": 0.9,
    "D1.capacitance": 9e-12,
    "D1.series_resistance": 10.0,
    "D1.shunt_resistance": 1e8,
    "D1.transit_frequency": 1e9,
    "D1.dark_current": 1e-9,
    "D1.ambient_current": 1e-6,
    "D1.signal_current": 2e-6,
    "D1.dark_shot": 1e-9,
    "D1.ambient_shot": 1e-6,
    "D1.signal_shot": 2e-6,
    "U1.gain_bandwidth": 400e6,
    "U1.second_pole": 700e6,
    "U1.open_loop_gain": 1e4,
    "U1.common_capacitance": 1.5e-12,
    "U1.differential_capacitance": 0.7e-12,
    "U1.output_resistance": 40.0,
    "U1.voltage_noise": 6e-9,
    "U1.voltage_noise_corner": 2e3,
    "U1.current_noise": 2e-15,
    "U1.current_noise_corner": 1e-9,
}


def topology() -> Topology:
    """A transimpedance amplifier as bare as can be."""
    return Topology(
        elements=(
            Photodiode("D1", anode=GROUND, cathode="sum"),
            Resistor("R1", "sum", "out", role="feedback"),
            Capacitor("C1", "sum", "out", role="feedback"),
            Capacitor("CB", "sum", GROUND, role="board", fitted=False),
            OpAmp("U1", plus=GROUND, minus="sum", out="out", positive="p", negative="n", role="amplifier"),
        ),
        input="D1",
        output=("out", GROUND),
        loop="U1",
    )


def result(**changes: Any) -> Result:
    """A receiver that meets one requirement and misses another."""
    derivation = Derivation()
    derivation.compute("R1", feedback_resistance, reason="one level and ambient", swing=2.0, current=81.6e-6)
    made = Result(
        head=HEAD,
        topology=topology(),
        requirements=(MET, MISSED),
        figures=(
            FoundFigure("bandwidth", 9.31e6, 8.49e6, 10.2e6, {}, {}, "Hz"),
            FoundFigure("overshoot", 0.043, 0.0, 0.11, {}, {}, "1"),
            FoundFigure("output_noise", 2.1e-4, 1.9e-4, 2.6e-4, {}, {}, "V"),
            FoundFigure("sensitivity", 1e-6, 0.8e-6, nan, {}, {}, "W"),
        ),
        parts=(R1, C1, U1),
        noise=(FoundNoise("R1 thermal", 1.6e-4, 0.6), FoundNoise("U1 voltage", 1.3e-4, 0.4)),
        heat=(FoundHeat("U1", 0.12, 351.15, 423.15, {"temperature": "high"}),),
        faults=(
            FoundFault("detector open", "output 0 V", True),
            FoundFault("R1 short", "U1 beyond its current", False),
        ),
        roundings=(
            Rounding("bandwidth", 9.22e6, 9.31e6, "Hz"),
            Rounding("overshoot", 0.0430001, 0.0430002, "1"),
        ),
        assumed=("U1 gain bandwidth ±30 %",),
        cautions=("C1 is no more than its own pads",),
        not_checked=("layout", "supply impedance"),
        derivation=derivation,
        scenes=(),
        noise_frequency=1e6,
        noise_band=(1e3, 10e6),
        limits={"temperature": Limit(298.15, 253.15, 333.15)},
    )
    return replace(made, **changes)
