"""Operating point of the switched LED, lit and dark.

A fault is told by values that are otherwise absent: ``D1.open``, ``D1.short``, ``Q1.short`` 1 where that part is so,
``U1.stuck`` 1 where the logic output rests low.
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.led import current_through, emitted, heated, led_limits, lit
from opto_ckt.circuits.drivers.led_switch.switch import control_figures, driven, storage
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LedSwitchRequest
from opto_ckt.topology import OPEN

PASSES = 4  #: over the current that a sweep-out resistor takes beside the LED
HELD_BIPOLAR = ("transition_frequency", "base_resistance")
HELD_MOSFET = ("transconductance", "reverse_capacitance", "output_capacitance", "gate_charge")


def given(request: LedSwitchRequest) -> dict[str, Limit]:
    """Curves of the LED, and the figures of the other sheets that nothing here reads, held still."""
    held = HELD_BIPOLAR if isinstance(request.transistor, BipolarData) else HELD_MOSFET
    sheets = {("transistor", "Q1"): held, ("logic_output", "U1"): ("rise_time",)}
    found = led_limits(request)
    for (table, ref), names in sheets.items():
        limits = request.limits(table)
        found |= {
            f"{ref}.{name}": Limit(limits[name].nominal, limits[name].nominal, limits[name].nominal)
            for name in names
            if name in limits
        }
    return found


def bias(values: Values, request: LedSwitchRequest) -> dict[str, float | Lanes]:
    """Current, light, heat, small-signal figures and node voltages with the LED lit, and the light while it is off."""
    state = driven(values, request)
    supply = np.asarray(values["supply.positive"], dtype=float)
    series = np.asarray(values["R1"] + np.asarray(values.get("R4", 0.0)), dtype=float)
    current, shunted = _through(values, request, supply - state.drop, series, state.resistance)
    most = np.maximum(state.most - shunted, 0.0)
    limited = current > most
    current = np.where(limited, most, current)
    led = lit(values, request, current)
    bridged = np.asarray(values.get("D1.short", 0.0)) > 0
    across = np.where(bridged, 0.0, np.asarray(led["D1.forward_voltage"]))
    total = current + np.where(bridged, 0.0, shunted)
    anode = supply - total * series
    drain = anode - across
    pulled = drain / np.asarray(values.get("R6", OPEN))
    collector = np.maximum(total - pulled, 0.0)
    found: dict[str, float | Lanes] = {
        **values,
        **led,
        **control_figures(values, request, state),
        "loop.current": total,
        "Q1.current": collector,
        "Q1.power": collector * np.maximum(drain, 0.0) + state.base * state.control,
        "Q1.voltage_off": supply,
        "U1.current": state.drawn,
        "U1.level": np.asarray(values["U1.high"], dtype=float),
        "U1.resistance": np.asarray(values["U1.source_resistance"], dtype=float),
        "overdrive": _overdrive(request, state.overdrive, collector),
        "storage": storage(values, request, collector, state),
        "peak_current": _peak(values, request, supply - state.drop, state.resistance, current),
        "set_voltage": supply,
        **_off(values, request, supply, series),
        "node.light": led["D1.emitted_power"],
        "node.led": anode,
        "node.drain": drain,
        "node.control": state.control,
        "node.gate": np.asarray(values["U1.high"]) - state.drawn * values["U1.source_resistance"],
    }
    if "R4" in values:
        found["node.peak"] = supply - total * values["R1"]
    return found


def _through(
    values: Values, request: LedSwitchRequest, voltage: Lanes, series: Lanes, switch: Lanes
) -> tuple[Lanes, Lanes]:
    """Current of the LED, and that of the sweep-out resistor beside it; both flow through resistors and switch. [A]"""
    whole = series + switch
    current = current_through(values, request, voltage, whole)
    shunted = np.zeros_like(current)
    if "R5" not in values:
        return current, shunted
    shunt = np.asarray(values["R5"], dtype=float)
    open_voltage, parallel = voltage * shunt / (shunt + whole), whole * shunt / (shunt + whole)
    current = current_through(values, request, open_voltage, parallel)
    return current, (open_voltage - current * parallel) / shunt


def _overdrive(request: LedSwitchRequest, drive: Lanes, collector: Lanes) -> Lanes:
    """Of a bipolar transistor: current that its base drive would let through, over that which flows. [1]"""
    if isinstance(request.transistor, BipolarData):
        return np.asarray(drive / np.maximum(collector, 1e-12))
    return np.asarray(drive)


def _peak(values: Values, request: LedSwitchRequest, voltage: Lanes, switch: Lanes, current: Lanes) -> Lanes:
    """First current of a step: the peaking capacitor is a short, the junction still as before. [A]"""
    if "R4" not in values:
        return current
    return np.maximum(current, current_through(values, request, voltage, np.asarray(values["R1"] + switch)))


def _off(values: Values, request: LedSwitchRequest, supply: Lanes, series: Lanes) -> dict[str, float | Lanes]:
    """Current and light while the switch is open: what the pre-bias resistor lets through."""
    if "R6" not in values:
        return {"off.voltage": 0.0}
    current, _ = _through(values, request, supply, series, np.asarray(values["R6"], dtype=float))
    voltage, junction = heated(values, request, current)
    return {
        "off.current": current,
        "off.power": emitted(values, request, current, junction),
        "off.voltage": voltage,
    }
