"""What the switch and its drive bear: refused at once where the sheets alone decide, else bounds on figures."""

from __future__ import annotations

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.drivers.led import asked_current, heated, nominal
from opto_ckt.limits import Requirement
from opto_ckt.parts.transistor import MosfetData
from opto_ckt.request import LedSwitchRequest
from opto_ckt.units import write

SWEPT_SPARE = 0.1  #: of the swept current, for tolerance and rounding of its resistor; common practice


def refused(request: LedSwitchRequest) -> tuple[Refusal, ...]:
    """A supply, level or current that the transistor's sheet forbids; a pre-bias that is no less than the current."""
    data, supply, pre_bias = request.transistor, request.conditions.supply, request.signal.pre_bias
    current, swept = asked_current(request), request.signal.sweep_out or 0.0
    reached = [
        (("conditions", "supply", "positive"), supply.positive * (1 + supply.tolerance), "voltage_max",
         data.voltage_max, "V", "lies across the open switch"),
        (("signal",), current + swept, "current_max", data.current_max, "A", "flows through the switch"),
    ]  # fmt: skip
    if isinstance(data, MosfetData):
        high = request.logic_output.high.high
        reached.append((("logic_output", "high"), high, "gate_voltage_max", data.gate_voltage_max, "V", "drives it"))
    found = [
        Refusal(path, f"{write(value, unit)} {what}, {name} of the transistor is {write(limit, unit)}")
        for path, value, name, limit, unit, what in reached
        if value > limit
    ]
    if pre_bias is not None and pre_bias >= current:
        found.append(
            Refusal(
                ("signal", "pre_bias"),
                f"{write(pre_bias, 'A')} while off is no less than the {write(current, 'A')} while lit",
            )
        )
    return tuple(found)


def switch_current(request: LedSwitchRequest) -> float:
    """Largest current of the LED that the transistor bears, the sweep-out resistor at its most beside it. [A]"""
    most, swept = request.transistor.current_max, request.signal.sweep_out
    if swept is None:
        return most
    ends, current = request.conditions.temperature, asked_current(request)
    usual = float(heated(nominal(request), request, current)[0])
    highest = max(
        float(heated(nominal(request, end, forward=1.0), request, current)[0]) for end in (ends.low, ends.high)
    )
    return most - swept * (1 + SWEPT_SPARE) * highest / usual


def peak_bound(request: LedSwitchRequest) -> float:
    """Largest first current of a step that LED and transistor bear. [A]"""
    source, data = request.source, request.transistor
    borne = data.pulse_current_max if isinstance(data, MosfetData) else None
    return min(source.pulse_current_max or source.current_max, borne or data.current_max)


def bounds(request: LedSwitchRequest) -> tuple[Requirement, ...]:
    """The switch is driven well, and neither it nor the LED passes the current of its sheet."""
    most, peak = switch_current(request), peak_bound(request)
    return (
        Requirement("overdrive", "min", 1.0, 0.5),
        Requirement("current", "max", most, most),
        Requirement("peak_current", "max", peak, peak),
    )
