"""Limits of the constant-current laser driver that no sheet states as they stand here."""

from __future__ import annotations

from opto_ckt.circuits.drivers.laser import laser_limits
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.limits import Limit
from opto_ckt.request import LaserDriverRequest

WINDING = Limit(0.3, 0.1, 0.6, assumed=True)
"""Resistance of the filter's winding, of which [preferred] says nothing: small inductors of some µH; from memory [Ω]"""


OF_NO_ACCOUNT = 1e-9  #: bias current of a FET input, at 25 °C, that moves no figure here: microvolts when hot [A]

HELD = (
    "U1.slew_rate", "U1.common_mode_to_positive", "U1.common_mode_to_negative", "Q1.gate_charge",
    "Q1.output_capacitance", "Q1.storage_time", "Q1.base_resistance",
)  # fmt: skip
"""Figures of the sheets that nothing here depends on: held at nominal."""


def given(request: LaserDriverRequest) -> dict[str, Limit]:
    """The laser's curves, the reference's tolerance with its drift, offset and bias current with either sign."""
    reference, amplifier = request.reference, request.amplifier
    temperature = request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    spread = reference.voltage * (reference.tolerance + reference.temperature_coefficient * farthest)
    offset, current = amplifier.offset_voltage.high, amplifier.bias_current.high
    if amplifier.bias_current_doubling is not None and current < OF_NO_ACCOUNT:
        current = 0.0
    sheets = {"U1": request.limits("amplifier"), "Q1": request.limits("transistor")}
    unread = {f"{ref}.{name}": figure.nominal for ref, sheet in sheets.items() for name, figure in sheet.items()}
    air = request.conditions.air
    return {
        **({} if air is None else {"temperature.air": Limit(air.nominal, air.low, air.high)}),
        **{name: Limit(unread[name], unread[name], unread[name]) for name in HELD if name in unread},
        **laser_limits(request),
        "U1.offset_voltage": Limit(0.0, -offset, offset),
        "U1.bias_current": Limit(0.0, -current, current),
        "U2.voltage": Limit(reference.voltage, reference.voltage - spread, reference.voltage + spread),
        "L1.resistance": WINDING,
        "control.disable": Limit(0.0, 0.0, 0.0),
    }
