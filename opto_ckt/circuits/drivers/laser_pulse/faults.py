"""What happens to laser, switch and supply when a part fails, the trigger stays or runs away, the clamp is missing."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers.laser import over_temperature
from opto_ckt.circuits.drivers.laser_pulse.figures import pulse_limit, switch_limit
from opto_ckt.circuits.drivers.laser_pulse.loads import switch_temperature
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPulseRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import percent, write

SWEEP = 41  #: supplies or rates tried
FASTEST = 0.5  #: most duty that a trigger run wild is taken to reach [1]
MELTED = 773.15  #: temperatures from here on are not told in figures, 500 °C [K]
DARK = 1e-6  #: currents below are none [A]


def faults(request: LaserPulseRequest) -> tuple[Fault, ...]:
    """The cases of a pulse driver; each computed by overriding values."""
    supply, signal = request.conditions.supply, request.signal
    highest = supply.positive * (1 + supply.tolerance)
    sweep = np.linspace(0.0, highest, SWEEP)[:, None]
    wild = np.geomspace(signal.repetition_rate.high, FASTEST / signal.pulse_width.nominal, SWEEP)[:, None]
    found = [
        Fault("supply at its highest", {"supply.positive": highest}),
        Fault("control before supply, brown-out, slow power-down", {"supply.positive": sweep[::-1]}),
        Fault("switch stuck on", {"Q1.short": 1.0}),
        Fault("switch open", {"Q1.open": 1.0}),
        Fault("trigger stuck high", {"U1.stuck": 1.0}),
        Fault("supply before control, trigger open", {"control.open": 1.0}),
        Fault("repetition too fast", {"signal.repetition_rate": wild}),
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("charging resistor open", {"R1": OPEN}),
        Fault("charging resistor short", {"R1": SHORT, "U1.stuck": 1.0}),
        Fault("damping resistor short", {"R3": SHORT}),
        Fault("storage capacitor short", {"C1.short": 1.0}),
        Fault("cold start after a warm set-up", {"temperature": request.conditions.temperature.low}),
        Fault("25 K above the hottest asked for", {"temperature": over_temperature(request)}),
    ]
    if request.diode is not None:
        found.append(Fault("clamp diode missing", {"D2.open": 1.0}))
    return tuple(found)


def outcome(fault: Fault, values: Values, request: LaserPulseRequest) -> FaultOutcome:
    """Pulses, direct current and light that the fault leads to, what limits them, whether a part passes its limit."""
    peak, steady, power, switch = (
        float(np.max(np.atleast_1d(values[name])))
        for name in ("D1.current", "D1.steady_current", "D1.peak_power", "Q1.current")
    )
    told = []
    if "D1.short" in fault.overrides:
        told.append(f"no current through the laser, {write(switch, 'A')} in pulses through the switch")
    elif steady > DARK:
        standing = float(np.max(np.atleast_1d(values["D1.steady_power"])))
        light = f"{write(standing, 'W')} of light" if standing > 0 else "no light"
        if "R1" in fault.overrides:
            told.append(
                f"no pulse but {write(steady, 'A')} and {light} while the switch is on and the laser lasts, limited"
                " by R3 and the loop's own resistance"
            )
        else:
            told.append(f"one last pulse of {write(peak, 'A')}, then {write(steady, 'A')} and {light}, limited by R1")
    elif peak > DARK:
        told.append(f"pulses of {write(peak, 'A')}, {write(power, 'W')} of light")
    else:
        told.append("no current through the laser")
    told += _charging(fault, values)
    if "signal.repetition_rate" in fault.overrides:
        told.append(f"{write(float(np.max(values['D1.optical_power'])), 'W')} of light on the average, limited by R1")
    if "D2.open" in fault.overrides:
        told.append(f"{write(float(np.max(values['recoil.voltage'])), 'V')} the other way round across the laser")
    if "Q1.open" in fault.overrides or "D1.open" in fault.overrides:
        charge = float(np.max(np.asarray(values["supply.positive"])))
        told.append(f"C1 stays charged to {write(charge, 'V')} until the supply is off and R2 has bled it")
    beyond = _beyond(values, request)
    said = ", ".join(told) + (": " + "; ".join(beyond) if beyond else "")
    average = np.maximum(values["D1.average_power"], values["D1.steady_power"])
    return FaultOutcome(said, not beyond, light=float(np.max(average)))


def _charging(fault: Fault, values: Values) -> list[str]:
    """Heat of R1 where the fault is one of its own load."""
    loads = {"Q1.short", "U1.stuck", "C1.short", "signal.repetition_rate"}
    if not loads & set(fault.overrides) or "R1" in fault.overrides:
        return []
    return [f"R1 takes {write(float(np.max(np.atleast_1d(values['R1.power']))), 'W')}"]


def _beyond(values: Values, request: LaserPulseRequest) -> list[str]:
    """Every part that passes its limit, with the figures."""
    data, found = request.source, []
    pulses: Lanes = np.asarray(values["D1.current"])
    rows = [
        ("the pulsed current that the laser stands", pulses, pulse_limit(request), "A"),
        ("current_max of the laser", values["D1.steady_current"], data.current_max, "A"),
        ("power_max of the laser", values["D1.power"], data.power_max, "W"),
        ("reverse_voltage_max of the laser", values["D1.reverse_voltage"], data.reverse_voltage_max, "V"),
        ("case_max of the laser", values["D1.case_temperature"], data.case_max, "°C"),
        ("the pulsed current that the switch stands", values["Q1.current"], switch_limit(request), "A"),
        ("junction_max of the switch", switch_temperature(values), request.transistor.junction_max, "°C"),
    ]
    for name, found_there, limit, unit in rows:
        most = float(np.max(np.atleast_1d(found_there)))
        if most > limit * (1 + 1e-9):
            reached = write(most, unit) if unit != "°C" or most < MELTED else "a temperature that destroys it"
            found.append(f"{reached} is above {name}, {write(limit, unit)}")
    duty = float(np.max(np.where(pulses > DARK, values["discharge.width"] * values["signal.repetition_rate"], 0.0)))
    if data.duty_max is not None and duty > data.duty_max:
        found.append(f"a duty of {percent(duty)} is above duty_max of the laser, {percent(data.duty_max)}")
    return found
