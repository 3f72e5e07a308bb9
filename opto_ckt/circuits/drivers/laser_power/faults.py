"""What happens to the laser when a joint opens, a part shorts, the monitor fails, a supply comes or goes."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers.laser import over_temperature
from opto_ckt.circuits.drivers.laser_power.figures import clamp_light, loop_gain
from opto_ckt.circuits.drivers.mishaps import DARK, SWEEP, amount, beyond
from opto_ckt.circuits.drivers.warmth import transistor_temperature
from opto_ckt.limits import Values
from opto_ckt.request import LaserPowerRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

SETTLED = 0.05  #: of the power wanted, that counts as having recovered [1]
WOUND_UP = {
    "load reconnected after wind-up": "both loops have recovered",
    "fast power-down and return": "both loops have recovered from the supply's return",
}
"""Cases in which both op amps start from the rail that asks for most light, and until when."""


def faults(request: LaserPowerRequest) -> tuple[Fault, ...]:
    """The cases of a laser driver with a monitor; each computed by overriding values."""
    supply, temperature = request.conditions.supply, request.conditions.temperature
    most = supply.positive * (1 + supply.tolerance)
    sweep = np.linspace(0.0, most, SWEEP)[:, None]
    found = [
        Fault("control before supply", {"supply.positive": sweep}),
        Fault("slow power-down", {"supply.positive": sweep[::-1]}),
        Fault("fast power-down and return", {"U1.stuck": 1.0, "U3.stuck": 1.0, "supply.positive": sweep}),
        Fault("brown-out", {"supply.positive": sweep}),
        Fault("reference missing", {"U2.open": 1.0}),
        Fault("reference short", {"U2.short": 1.0}),
        Fault("monitor open", {"D1.monitor_open": 1.0}),
        Fault("monitor short", {"D1.monitor_short": 1.0}),
        Fault("set resistor open", {"set.open": 1.0}),
        Fault("set resistor short", {"set.short": 1.0}),
        Fault("trimmer's wiper open", {"RV1.open": 1.0}),
        Fault("integrator at the rail that asks for most", {"U3.stuck": 1.0}),
        Fault("integrator at the rail that asks for none", {"U3.stuck": -1.0}),
        Fault("op amp at the rail that turns Q1 on", {"U1.stuck": 1.0}),
        Fault("op amp at the rail that turns Q1 off", {"U1.stuck": -1.0}),
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("load reconnected after wind-up", {"U1.stuck": 1.0, "U3.stuck": 1.0}),
        Fault("sense resistor open", {"R1": OPEN}),
        Fault("sense resistor short", {"R1": SHORT}),
        Fault("clamp divider's lower resistor open", {"R3": OPEN}),
        Fault("pass transistor short", {"Q1.short": 1.0}),
        Fault("cold start after a warm set-up", {"temperature": temperature.low, "trim.temperature": temperature.high}),
        Fault("25 K above the hottest asked for", {"temperature": over_temperature(request)}),
    ]
    if request.signal.enable:
        found.insert(0, Fault("supply before control", {"control.open": 1.0}))
    return tuple(found)


def outcome(fault: Fault, values: Values, request: LaserPowerRequest) -> FaultOutcome:
    """Laser current and light that the fault leads to, whether a part passes its limit, and what keeps it."""
    names = ("D1.current", "D1.power", "D1.case_temperature", "Q1.power")
    lanes = [np.asarray(values[name], dtype=float) for name in names]
    current, power, case, dissipated, junction = np.broadcast_arrays(*lanes, np.asarray(transistor_temperature(values)))
    worst = int(np.argmax(power)) if np.max(power) > 0 else int(np.argmax(current))
    text = amount(float(np.max(current)))
    if float(np.max(power)) > 0 and float(np.max(current)) > DARK:
        text += f", {write(float(np.max(power)), 'W')} of light"
    held = _held(fault, values, worst, request)
    text += f", {held}" if held else ""
    if fault.case in WOUND_UP:
        clamped = float(np.max(np.broadcast_to(values["clamp_current"], current.shape)))
        recovery = write(_recovery(values, request), "s")
        text += f", then {write(clamped, 'A')} of the clamp for {recovery} until {WOUND_UP[fault.case]}"
    if fault.case == "load short":
        text += f"; Q1 takes {write(float(np.max(dissipated)), 'W')}, {write(float(np.max(junction)), '°C')} inside"
    passed = beyond(current, power, case, junction, request)
    if passed:
        text += ": " + "; ".join(passed)
    return FaultOutcome(text, not passed, power)


def _held(fault: Fault, values: Values, worst: int, request: LaserPowerRequest) -> str:
    """What limits the current in the lane with most light."""
    shape = np.shape(np.atleast_1d(values["D1.current"]))
    names = ("Q1.drain_current", "hard_on_current", "regulated_current", "clamp_current", "needed_current")
    current, hard_on, asked, clamp, needed = (float(np.broadcast_to(values[n], shape)[worst]) for n in names)
    if "D1.short" in fault.overrides:
        return f"the clamp lets {write(current, 'A')} flow past it"
    if current <= DARK:
        return ""
    starved = float(np.broadcast_to(values["supply.positive"], shape)[worst]) < request.amplifier.supply_min
    if "Q1.short" in fault.overrides or current > 1.0001 * hard_on:
        return "limited by R7 and the laser alone"
    if starved and current >= 0.9999 * hard_on:
        return "limited by R7, the op amps below their least supply"
    if current >= 0.9999 * hard_on and (asked > hard_on or fault.overrides.get("U1.stuck")):
        return "limited by R7, Q1 hard on"
    if needed > clamp or current >= 0.9999 * clamp:
        return "limited by the clamp of R2, R3 and R1"
    return "regulated"


def _recovery(values: Values, request: LaserPowerRequest) -> float:
    """The longest time from the clamp's light to 5 % above the one wanted: the integrator's loop lets go of it. [s]"""
    wanted = np.maximum(np.asarray(values["wanted_power"]), 1e-12)
    excess = np.maximum(clamp_light(values, request) / wanted - 1, SETTLED)
    rate = np.maximum(loop_gain(values, request), 1e-9) / (np.asarray(values["R10"]) * np.asarray(values["C4"]))
    time = np.log(excess / SETTLED) / rate
    supply = request.conditions.supply
    fed = np.asarray(values["supply.positive"]) >= supply.positive * (1 - supply.tolerance)
    return float(np.max(np.where(np.isfinite(time) & fed, time, 0.0)))
