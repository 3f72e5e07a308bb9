"""Changes of the constant-current laser driver's starter that tests share, and values to evaluate it at."""

from __future__ import annotations

HIGH = (
    ("common  ", 'common = "laser cathode with monitor anode"'),
    ("kind  ", 'kind = "pmos"'),
)
"""On the high side, all figures the same."""

BIPOLAR = (
    ("kind  ", 'kind = "npn"'),
    ("threshold_voltage", 'current_gain = { min = "80", typ = "160", max = "300" }'),
    ("transconductance  ", 'base_emitter_voltage = { min = "0.6 V", typ = "0.7 V", max = "0.8 V" }'),
    ("transconductance_current", 'saturation_voltage = { typ = "0.1 V", max = "0.3 V" }'),
    ("on_resistance  ", 'transition_frequency = "200 MHz"'),
    ("on_resistance_gate", 'collector_capacitance = "4 pF"'),
    ("input_capacitance", ""),
    ("reverse_capacitance", ""),
    ("gate_charge", ""),
    ("gate_voltage_max", ""),
)
"""With an npn transistor."""

POINTS = (
    ("turn_on_voltage", 'forward = [ { current = "10 mA", voltage = "1.0 V" },'),
    ("series_resistance", '{ current = "30 mA", voltage = { min = "1.0 V", typ = "1.1 V", max = "1.25 V" } } ]'),
    ("threshold_current", 'threshold_points = [ { temperature = "0 °C", current = "6 mA" },'),
    (
        "characteristic_temperature",
        '{ temperature = "25 °C", current = "8 mA" }, { temperature = "70 °C", current = "16 mA" } ]',
    ),
)
"""A laser by the points of its curves."""

SURFACE = (
    ("threshold_current", 'threshold_minimum = "1.2 mA"'),
    ("characteristic_temperature", 'threshold_minimum_temperature = "30 °C"\nthreshold_curvature = "1.1e-4 1/K²"'),
    ("current  ", 'current = "6 mA"'),
    ("current_max {16}=", 'current_max = "20 mA"'),
)
"""A surface emitter, whose threshold has its least in the middle of the range."""

NEGATIVE = (
    ("supply  ", 'supply = { positive = "5 V", negative = "-2 V", tolerance = "5 %" }'),
    ("supply_max", 'supply_max = "12 V"'),
)
"""With a negative supply for the op amp."""

FACET = (
    ("plane  ", 'plane = "facet"\ncoupling = { min = "30 %", typ = "40 %", max = "50 %" }'),
    ("current  ", 'current = "30 mA"\nplane = "fibre"'),
)
"""A laser stated at its facet, asked for at the fibre."""

CHOSEN = {
    "R1": 7.5, "R2": 10.2e3, "R3": 2.26e3, "R4": 1e3, "R5": 100.0, "R6": 5.62e3, "R7": 78.7, "R8": 0.59, "R9": 1e3,
    "R11": 100e3, "R12": 100e3, "C1": 360e-12, "C2": 1e-6, "C3": 10e-6, "C8": 100e-9, "C9": 100e-9, "L1": 10e-6,
}  # fmt: skip
