"""The registry: every circuit by name, loaded when it is asked for."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from opto_ckt.circuit import Circuit

CIRCUITS: dict[str, str] = {
    "load-resistor": "opto_ckt.circuits.receivers.load_resistor",
    "tia": "opto_ckt.circuits.receivers.tia",
    "tia-bootstrap": "opto_ckt.circuits.receivers.tia_bootstrap",
    "tia-cascode": "opto_ckt.circuits.receivers.tia_cascode",
    "tia-tee": "opto_ckt.circuits.receivers.tia_tee",
    "tia-balanced": "opto_ckt.circuits.receivers.tia_balanced",
    "tia-switched": "opto_ckt.circuits.receivers.tia_switched",
    "tia-discrete": "opto_ckt.circuits.receivers.tia_discrete",
    "tia-fixed": "opto_ckt.circuits.receivers.tia_fixed",
    "led-resistor": "opto_ckt.circuits.drivers.led_resistor",
    "led-switch": "opto_ckt.circuits.drivers.led_switch",
    "led-linear": "opto_ckt.circuits.drivers.led_linear",
    "laser-current": "opto_ckt.circuits.drivers.laser_current",
    "laser-pulse": "opto_ckt.circuits.drivers.laser_pulse",
    "laser-power": "opto_ckt.circuits.drivers.laser_power",
}
"""Name -> module whose ``CIRCUIT`` it is."""


def load(name: str) -> Circuit:
    """The circuit of that name.

    Raises
    ------
    KeyError : there is none of that name in `CIRCUITS`.
    """
    circuit: Circuit = import_module(CIRCUITS[name]).CIRCUIT
    return circuit
