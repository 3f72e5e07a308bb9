"""Corners in words, as they stand beside the figures of a result."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.limits import Corner, Level, Limits
from opto_ckt.topology import Topology
from opto_ckt.units import write

SHOWN = 4  #: settings that are named; the others are counted

FIGURES: Mapping[str, str] = {
    "bias_current": "input bias current",
    "capacitance": "C",
    "common_capacitance": "common-mode C",
    "current_gain": "β",
    "current_noise": "current noise",
    "current_noise_corner": "current-noise corner",
    "differential_capacitance": "differential C",
    "gain": "M",
    "gain_bandwidth": "GBW",
    "gain_bandwidth_product": "gain-bandwidth product",
    "input_capacitance": "C",
    "monitor_responsivity": "monitor",
    "offset_voltage": "offset",
    "offset_drift": "offset drift",
    "on_resistance": "R_on",
    "open_loop_gain": "open-loop gain",
    "reverse_capacitance": "reverse C",
    "series_resistance": "R_s",
    "shunt_resistance": "R_sh",
    "transconductance": "g_m",
    "transition_frequency": "f_T",
    "voltage_noise": "voltage noise",
    "voltage_noise_corner": "voltage-noise corner",
}
"""Figures of a part whose short word is not the name itself with spaces."""

LIGHT: Mapping[tuple[str, Level], str] = {
    ("signal.power", "low"): "least light",
    ("signal.power", "high"): "most light",
    ("signal.ambient", "low"): "no ambient light",
    ("signal.ambient", "high"): "most ambient light",
    ("temperature", "low"): "coldest",
    ("temperature", "high"): "hottest",
    ("temperature.air", "low"): "coldest air",
    ("temperature.air", "high"): "warmest air",
}
CONTACTS: Mapping[tuple[str, Level], str] = {("closed", "low"): "open", ("closed", "high"): "closed"}
SUPPLIES: Mapping[str, str] = {
    "supply.positive": "positive supply",
    "supply.negative": "negative supply",
    "supply.bias": "bias supply",
}


def describe(corner: Corner, limits: Limits | None = None, labels: Mapping[str, str] | None = None) -> str:
    """A corner in a few words, its settings in the order in which the corner holds them.

    Parameters
    ----------
    corner : levels of the limits that are not nominal.
    limits : where the temperature and the supplies are looked up; words stand for those that are not in it.
    labels : by designator, what to call a part; the designator itself without.

    >>> describe({"U1.gain_bandwidth": "low", "D1.capacitance": "high", "temperature": "high"})
    'U1 GBW low, D1 C high, hottest'
    >>> describe({})
    'nominal'
    """
    moved = [(name, level) for name, level in corner.items() if level != "nominal"]
    settings = [_setting(name, level, limits or {}, labels or {}) for name, level in moved]
    if not settings:
        return "nominal"
    left = len(settings) - SHOWN
    return ", ".join(settings[:SHOWN]) + (f" and {left} more" if left > 0 else "")


def labels_of(topology: Topology) -> dict[str, str]:
    """What to call those parts that no assembler fits, and no bill of materials explains: ``CB (board)``."""
    return {e.ref: f"{e.ref} ({e.role})" for e in topology if not e.fitted and e.role}


def _setting(name: str, level: Level, limits: Limits, labels: Mapping[str, str]) -> str:
    if name == "temperature" and name in limits:
        return write(float(limits[name].at(level, 0.0)), "°C")
    if name in SUPPLIES and name in limits:
        return f"{SUPPLIES[name]} {write(float(limits[name].at(level, 0.0)), 'V')}"
    if (name, level) in LIGHT:
        return LIGHT[name, level]
    ref, _, figure = name.partition(".")
    if (figure, level) in CONTACTS:
        return f"{ref} {CONTACTS[figure, level]}"
    return f"{_subject(name, labels)} {level}"


def _subject(name: str, labels: Mapping[str, str]) -> str:
    """``U1.gain_bandwidth`` as ``U1 GBW``, ``R1`` as it is."""
    ref, _, figure = name.partition(".")
    words = FIGURES.get(figure, figure.replace("_", " "))
    return SUPPLIES.get(name) or f"{labels.get(ref, ref)} {words}".rstrip()
