"""What happens to the laser when a joint opens, a part shorts, a supply comes or goes, or it gets too hot or cold."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers.laser import over_temperature
from opto_ckt.circuits.drivers.mishaps import DARK, SWEEP, amount, beyond
from opto_ckt.circuits.drivers.warmth import transistor_temperature
from opto_ckt.limits import Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

EXPLAINED = {
    "load reconnected after wind-up": "for {recovery} until the loop has recovered",
    "fast power-down and return": "for {recovery} after the supply is back, the op amp having wound up",
}
"""What is said besides, by case."""


def faults(request: LaserDriverRequest) -> tuple[Fault, ...]:
    """The cases of a laser driver; each computed by overriding values. A monitor diode is not used here."""
    supply = request.conditions.supply
    most = supply.positive * (1 + supply.tolerance)
    sweep = np.linspace(0.0, most, SWEEP)[:, None]
    found = [
        Fault("control before supply", {"supply.positive": sweep}),
        Fault("slow power-down", {"supply.positive": sweep[::-1]}),
        Fault("fast power-down and return", {"U1.stuck": 1.0, "supply.positive": sweep}),
        Fault("brown-out", {"supply.positive": sweep}),
        Fault("reference missing", {"U2.open": 1.0}),
        Fault("reference short", {"U2.voltage": 0.0}),
        Fault("op amp at the rail that turns Q1 on", {"U1.stuck": 1.0}),
        Fault("op amp at the rail that turns Q1 off", {"U1.stuck": -1.0}),
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("load reconnected after wind-up", {"U1.stuck": 1.0}),
        Fault("sense resistor open", {"R1": OPEN}),
        Fault("sense resistor short", {"R1": SHORT}),
        Fault("pass transistor short", {"Q1.short": 1.0}),
        Fault("cold start after a warm set-up", {"temperature": request.conditions.temperature.low}),
        Fault("25 K above the hottest asked for", {"temperature": over_temperature(request)}),
    ]
    if request.signal.enable:
        found.insert(0, Fault("supply before control", {"control.open": 1.0}))
    return tuple(found)


def outcome(fault: Fault, values: Values, request: LaserDriverRequest) -> FaultOutcome:
    """Laser current and light that the fault leads to, whether a part passes its limit, and what keeps it."""
    lanes = np.broadcast_arrays(
        *(
            np.asarray(values[name], dtype=float)
            for name in ("D1.current", "D1.power", "D1.case_temperature", "Q1.power")
        ),
        np.asarray(transistor_temperature(values), dtype=float),
    )
    current, power, case, dissipated, junction = lanes
    worst = int(np.argmax(current))
    passed = beyond(current, power, case, junction, request)
    text = f"{amount(float(current[worst]))}"
    if float(np.max(power)) > 0 and float(current[worst]) > DARK:
        text += f", {write(float(np.max(power)), 'W')} of light"
    held = _held(fault, values, worst)
    text += f", {held}" if held else ""
    if fault.case in EXPLAINED:
        text += " " + EXPLAINED[fault.case].format(recovery=write(_recovery(values, worst), "s"))
    if fault.case == "load short":
        text += f"; Q1 takes {write(float(np.max(dissipated)), 'W')}, {write(float(np.max(junction)), '°C')} inside"
    if passed:
        text += ": " + "; ".join(passed)
    return FaultOutcome(text, not passed, power)


def _held(fault: Fault, values: Values, worst: int) -> str:
    """What limits the current."""
    current, hard_on, regulated = (
        float(np.broadcast_to(values[name], np.shape(np.atleast_1d(values["D1.current"])))[worst])
        for name in ("Q1.drain_current", "hard_on_current", "regulated_current")
    )
    if "D1.short" in fault.overrides:
        return f"the loop regulates {write(current, 'A')} past it"
    if current <= DARK:
        return ""
    if "Q1.short" in fault.overrides or current > 1.0001 * hard_on:
        return "limited by R7 and the laser alone"
    if current >= 0.9999 * hard_on and (regulated > hard_on or fault.overrides.get("U1.stuck")):
        return "limited by R7, Q1 hard on"
    return "regulated"


def _recovery(values: Values, worst: int) -> float:
    """Time in which the op amp comes back from its rail: its slew rate, and C1 charged through R4 by the excess. [s]"""
    names = (
        "supply.span",
        "Q1.control_voltage",
        "hard_on_current",
        "regulated_current",
        "R1",
        "R4",
        "C1",
        "U1.slew_rate",
    )
    lanes = np.broadcast_arrays(np.atleast_1d(values["D1.current"]), *(np.asarray(values[name]) for name in names))
    span, control, hard_on, regulated, sense, lead, capacitance, slew = (float(lane[worst]) for lane in lanes[1:])
    swing, error = abs(span - control), (hard_on - regulated) * sense
    return swing / slew + (swing * lead * capacitance / error if error > 0 else 0.0)
