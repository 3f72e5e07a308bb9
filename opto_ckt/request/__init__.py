"""Records of the design file; the request of each kind of circuit is loaded when it is asked for."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

from opto_ckt.request.request import Request

if TYPE_CHECKING:
    from opto_ckt.request.driver import LaserDriverRequest, LaserRequest
    from opto_ckt.request.laser_power import LaserPowerRequest
    from opto_ckt.request.laser_pulse import LaserPulseRequest
    from opto_ckt.request.led import LedDriverRequest
    from opto_ckt.request.led_linear import LedLinearRequest
    from opto_ckt.request.led_switch import LedSwitchRequest
    from opto_ckt.request.receiver import (
        BootstrapRequest,
        CascodeRequest,
        DiscreteRequest,
        FixedTiaRequest,
        LoadResistorRequest,
        OpAmpReceiverRequest,
        ReceiverRequest,
        SwitchedRequest,
    )

__all__ = [
    "BootstrapRequest",
    "CascodeRequest",
    "DiscreteRequest",
    "FixedTiaRequest",
    "LaserDriverRequest",
    "LaserPowerRequest",
    "LaserPulseRequest",
    "LaserRequest",
    "LedDriverRequest",
    "LedLinearRequest",
    "LedSwitchRequest",
    "LoadResistorRequest",
    "OpAmpReceiverRequest",
    "ReceiverRequest",
    "Request",
    "SwitchedRequest",
]

LOADED_ON_USE = {
    "BootstrapRequest": "receiver",
    "CascodeRequest": "receiver",
    "DiscreteRequest": "receiver",
    "FixedTiaRequest": "receiver",
    "LoadResistorRequest": "receiver",
    "OpAmpReceiverRequest": "receiver",
    "ReceiverRequest": "receiver",
    "SwitchedRequest": "receiver",
    "LaserDriverRequest": "driver",
    "LaserPowerRequest": "laser_power",
    "LaserPulseRequest": "laser_pulse",
    "LaserRequest": "driver",
    "LedDriverRequest": "led",
    "LedLinearRequest": "led_linear",
    "LedSwitchRequest": "led_switch",
}


def __getattr__(name: str) -> Any:
    if name not in LOADED_ON_USE:
        raise AttributeError(f"module {__name__} has no attribute {name}")
    return getattr(import_module(f"{__name__}.{LOADED_ON_USE[name]}"), name)
