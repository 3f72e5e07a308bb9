"""Changes of the power-controlled laser driver's starter that tests share, and values to evaluate it at."""

from __future__ import annotations

from tests.circuits.lc import BIPOLAR as BIPOLAR
from tests.circuits.lc import HIGH as HIGH

COMPUTED = (
    ("threshold_current", 'threshold_current = { min = "10 mA", typ = "10 mA", max = "10 mA" }'),
    ("characteristic_temperature", 'characteristic_temperature = "60 K"'),
    ("slope_efficiency", 'slope_efficiency = { min = "0.3 W/A", typ = "0.3 W/A", max = "0.3 W/A" }'),
    ("slope_temperature", 'slope_temperature = "180 K"'),
    ("turn_on_voltage", 'turn_on_voltage = { min = "0.95 V", typ = "0.95 V", max = "0.95 V" }'),
    ("series_resistance", 'series_resistance = { min = "6 Ω", typ = "6 Ω", max = "6 Ω" }'),
    ("junction_to_case", 'junction_to_case = { min = "100 K/W", typ = "100 K/W", max = "100 K/W" }'),
    ("case_max", 'case_max = "120 °C"'),
    ("current_max {16}=", 'current_max = "500 mA"'),
    ("power_max {18}=", 'power_max = "60 mW"'),
    ("sink_resistance", 'temperature_of = "case"'),
    ("temperature     =", 'temperature = { min = "80 °C", typ = "85 °C", max = "85 °C" }'),
    ("ageing", ""),
    ("tracking_error  ", ""),
    ("tracking_error_temperatures", ""),
)
"""The laser whose heat was computed by two roads: 100 K/W, 10 mA, 60 K, 0.3 W/A, 180 K, 0.95 V, 6 Ω."""

CHOSEN = {
    "R1": 4.53, "R2": 47.5e3, "R3": 1.96e3, "R4": 1e3, "R5": 100.0, "R6": 6.81e3, "R7": 76.8, "R8": 0.59, "R9": 1e3,
    "R10": 100e3, "R11": 100e3, "R12": 100e3, "R13": 10e3, "R14": 5.11e3, "R15": 100e3,
    "R16": 1e6, "RV1": 22e3, "C1": 20e-12, "C2": 220e-9, "C3": 10e-6, "C4": 1e-9, "C8": 100e-9, "L1": 10e-6,
}  # fmt: skip
