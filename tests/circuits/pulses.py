"""Changes of the pulse driver's starter that tests share."""

from __future__ import annotations

NAME = "laser-pulse"
Changes = tuple[tuple[str, str], ...]

SLOW = (("pulse_width  ", 'pulse_width = "60 ns"'),)
"""So much damping that the discharge does not swing back."""

BARE = (
    (r"\[diode\] ", ""),
    ("forward   ", ""),
    ("reverse_voltage_max = ", ""),
    ("capacitance         = ", ""),
    ("pulse_current_max   = ", ""),
)
"""No clamp diode."""

CURVED = (
    ("turn_on_voltage", 'forward = [ { current = "1 A", voltage = "5.2 V" }, { current = "10 A", voltage = "6.9 V" },'),
    ("series_resistance", '{ current = "40 A", voltage = "11 V" } ]'),
)
"""The laser's voltage by listed points."""

POWER = (("current  ", 'power = "70 W"'),)
VARIANTS = {"swinging": (), "slow": SLOW, "bare": BARE, "curved": CURVED, "power": POWER}
