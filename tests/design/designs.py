"""A receiver and a laser driver as text, to be spoilt by the tests."""

from __future__ import annotations

import re
from pathlib import Path

from opto_ckt.design.reading import ReadDesign, read_request, read_text
from opto_ckt.errors import InputError
from opto_ckt.request import LaserDriverRequest, ReceiverRequest, Request

JARGON = re.compile(
    r"Input should|Field required|Extra inputs|validation error|pydantic|type=|Value error|NoneType|dict\b"
)
"""Words of the machinery that no message may hold."""

CIRCUITS: dict[str, type[Request]] = {"tia": ReceiverRequest, "laser-current": LaserDriverRequest}

DETECTOR = """\
material = "InGaAs"
responsivity = "0.9 A/W"
responsivity_wavelength = "1310 nm"
capacitance = { typ = "1.5 pF", max = "2 pF" }
capacitance_bias = "5 V"
dark_current = { typ = "1 nA", max = "5 nA" }
reverse_voltage_max = "20 V"
"""

AMPLIFIER = """\
gain_bandwidth = "400 MHz"
open_loop_gain = "70 dB"
common_capacitance = "0.7 pF"
differential_capacitance = "2.8 pF"
voltage_noise = "7 nV/√Hz"
current_noise = "1.3 fA/√Hz"
offset_voltage = { typ = "0.25 mV", max = "1.8 mV" }
bias_current = { typ = "2 pA", max = "20 pA" }
slew_rate = "290 V/µs"
swing_to_positive = "1.2 V"
swing_to_negative = "1.2 V"
output_current_max = "40 mA"
quiescent_current = "14 mA"
supply_min = "4 V"
supply_max = "12.6 V"
"""

RECEIVER = f"""\
schema = 1
title = "Valley receiver"
revision = "A"
circuit = "tia"

[detector]
{DETECTOR}reverse_bias = "5 V"
output = "cathode"

[amplifier]
{AMPLIFIER}
[signal]
wavelength = "1310 nm"
power = {{ typ = "2 µW", max = "50 µW" }}
ambient = "1 µA"
bit_rate = "10 Mbit/s"
extinction_ratio = "9 dB"

[target]
response = "flat"

[conditions]
temperature = {{ min = "-20 °C", max = "60 °C" }}
supply = {{ positive = "5 V", negative = "-5 V", tolerance = "5 %" }}

[require]
bandwidth = {{ min = "8 MHz" }}
peaking = {{ max = "0.5 dB" }}

[preferred]
resistors = {{ series = ["10 kΩ", "22k1"] }}

[assumed]
gain_bandwidth = "40 %"

[fixed]
R1 = "22 kΩ"
"""

PARTS = f"""\
[photodiode."HB-PIN-55"]
{DETECTOR}
[opamp.HB-OA-400]
{AMPLIFIER}"""

WITH_PARTS = """\
circuit = "tia"
parts = ["parts.toml"]

[detector]
part = "HB-PIN-55"
reverse_bias = "5 V"

[amplifier]
part = "HB-OA-400"

[signal]
wavelength = "1310 nm"
power = "-20 dBm"
band = { max = "1 MHz" }

[conditions.supply]
positive = "5 V"
negative = "-5 V"
"""

LASER_DRIVER = f"""\
circuit = "laser-current"

[source]
wavelength = "1310 nm"
plane = "facet"
threshold_current = "12 mA"
characteristic_temperature = "60 K"
slope_efficiency = "0.3 W/A"
slope_temperature = "-0.4 %/K"
turn_on_voltage = "0.9 V"
series_resistance = "5 Ω"
current_max = "60 mA"
power_max = "8 mW"
reverse_voltage_max = "2 V"
junction_to_case = "60 K/W"
case_max = "85 °C"
common = "none"

[transistor]
kind = "nmos"
threshold_voltage = "1.5 V"
transconductance = "0.5 A/V"
transconductance_current = "0.2 A"
on_resistance = "1 Ω"
on_resistance_gate = "4.5 V"
input_capacitance = "50 pF"
reverse_capacitance = "5 pF"
gate_charge = "1 nC"
gate_voltage_max = "20 V"
current_max = "0.5 A"
voltage_max = "30 V"
power_max = "0.4 W"
power_max_at = "ambient"
junction_to_ambient = "300 K/W"
junction_max = "150 °C"

[amplifier]
{AMPLIFIER}
[reference]
voltage = "1.25 V"
tolerance = "0.5 %"

[signal]
current = "25 mA"

[conditions]
supply = {{ positive = "5 V" }}
"""


def read(text: str, name: str = "design.toml", folder: str = "", **fitted: str) -> ReadDesign:
    return read_text(text, name, folder, circuit_of=CIRCUITS.__getitem__, circuits=CIRCUITS, fitted=fitted)


def read_file(path: Path) -> ReadDesign:
    return read_request(str(path), circuit_of=CIRCUITS.__getitem__, circuits=CIRCUITS)


def problems(text: str, folder: str = "") -> list[str]:
    """What reading says about a text; empty where it reads it."""
    try:
        read(text, folder=folder)
    except InputError as error:
        return [str(problem) for problem in error.problems]
    return []


def line_of(text: str, start: str) -> int:
    """Number of the first line that starts so."""
    return next(number for number, line in enumerate(text.splitlines(), 1) if line.startswith(start))
