"""What an op amp is at a temperature: its input bias current and its offset."""

from __future__ import annotations

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.opamp import OpAmpData


def either_sign(data: OpAmpData, ref: str = "U1") -> dict[str, Limit]:
    """Limits of the offset voltage, which a sheet states without its sign."""
    offset = data.offset_voltage
    return {f"{ref}.offset_voltage": Limit(offset.nominal, -offset.high, offset.high)}


def warmed(values: Values, data: OpAmpData, ref: str = "U1") -> dict[str, float | Lanes]:
    """Input bias current, that of a FET input grown like a diode's leakage, and offset with its drift. [A, V]"""
    offset = values[f"{ref}.offset_voltage"]
    drift = values.get(f"{ref}.offset_drift", 0.0) * np.abs(values["temperature"] - ROOM_TEMPERATURE)
    bias = values[f"{ref}.bias_current"]
    if data.bias_current_doubling is not None:
        bias = dark_current(
            dark_current=bias,
            temperature=values["temperature"],
            reference_temperature=ROOM_TEMPERATURE,
            doubling=data.bias_current_doubling,
        )
    return {f"{ref}.bias_current": bias, f"{ref}.offset": offset + np.copysign(drift, offset)}
