r"""Constant-current laser driver: op amp, pass transistor, sense resistor; on the low side or mirrored on the high side.

    rail --R6--+-- ref --R2--+-- set --R9-- plus      rail
               |             |                         |
               U2            R3, C2            |\      D1 (D2 across)
               |             |          plus --|+\     |
              near          near               | U1>-R5- Q1 -- R7
                                       minus --|-/     |
                                         |     |/ |    |
                                         +---C1---+    |
                                         +------R4-----+ sense --R1-- near

``near`` is ground on the low side, the rail on the high side; R7 keeps the laser safe with Q1 hard on. L1 with R8 across
it and C3 filter the supply; Q2 shorts the set voltage unless the disable input is pulled low.
"""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response, stability
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import Bench, Circuit, Fitted, Heat, OnDemand, Stress
from opto_ckt.circuits.drivers import laser_current_faults, laser_current_loads, laser_current_sizing
from opto_ckt.circuits.drivers.laser import asked_current, junction_limit, laser_limits
from opto_ckt.circuits.drivers.laser_current_bias import bias
from opto_ckt.circuits.drivers.laser_current_starter import STARTER
from opto_ckt.circuits.drivers.laser_current_structure import topology
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.formulas.reference import parallel_resistance, soft_start_time
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import LaserDriverRequest

WINDING = Limit(0.3, 0.1, 0.6, assumed=True)
"""Resistance of the filter's winding, where [preferred] states none: small power inductors of some µH; from memory [Ω]"""

SETTLED = 0.95  #: of the current, at the end of the soft start
NOISE_FREQUENCY = 10e3  #: where densities are stated; common practice, above most 1/f noise [Hz]
NOISE_BAND = (10.0, 10e6)  #: over which noise is summed, common practice [Hz]


def given(request: LaserDriverRequest) -> dict[str, Limit]:
    """The laser's curves, the reference's tolerance with its drift, offset and bias current with either sign."""
    reference, amplifier = request.reference, request.amplifier
    temperature = request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    spread = reference.voltage * (reference.tolerance + reference.temperature_coefficient * farthest)
    offset, current = amplifier.offset_voltage.high, amplifier.bias_current.high
    return {
        **laser_limits(request),
        "U1.offset_voltage": Limit(0.0, -offset, offset),
        "U1.bias_current": Limit(0.0, -current, current),
        "U2.voltage": Limit(reference.voltage, reference.voltage - spread, reference.voltage + spread),
        "L1.resistance": WINDING,
        "control.disable": Limit(0.0, 0.0, 0.0),
    }


class LaserCurrentFigures:
    """Each figure as a property, computed when it is first asked for."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LaserDriverRequest) -> None:
        self._values, self._evaluation, self._request = values, evaluation, request

    @cached_property
    def current(self) -> Lanes:
        """Through the laser. [A]"""
        return np.asarray(self._values["D1.current"])

    @cached_property
    def current_error(self) -> Lanes:
        """Distance from the current asked for, as a share of it. [1]"""
        return np.abs(self.current / asked_current(self._request) - 1)

    @cached_property
    def optical_power(self) -> Lanes:
        """At the plane asked for; nothing is trimmed. [W]"""
        return np.asarray(self._values["D1.optical_power"])

    @cached_property
    def compliance_margin(self) -> Lanes:
        """Supply left over at the current that is regulated to. [V]"""
        return np.asarray(self._values["compliance_margin"])

    @cached_property
    def loop_bandwidth(self) -> Lanes:
        """Half-power frequency of the current over the set voltage. [Hz]"""
        return response.bandwidth(self._evaluation)

    @cached_property
    def phase_margin(self) -> Lanes:
        """Of the op amp's loop. [°]"""
        return stability.phase_margin(self._evaluation)

    @cached_property
    def peaking(self) -> Lanes:
        """Highest gain over that at DC. [dB]"""
        return response.peaking(self._evaluation)

    @cached_property
    def overshoot(self) -> Lanes:
        """Of a step of the set voltage, as a share of it. [1]"""
        return response.overshoot(self._evaluation)

    @cached_property
    def rise_time(self) -> Lanes:
        """10-90 % of a small step of the set voltage; the soft start's time apart. [s]"""
        return response.rise_time(self._evaluation)

    @cached_property
    def startup_time(self) -> Lanes:
        """Soft start to 95 % of the current. [s]"""
        values = self._values
        return np.asarray(
            soft_start_time(
                resistance=parallel_resistance(first=values["R2"], second=values["R3"]),
                capacitance=values["C2"],
                fraction=SETTLED,
            )
        )

    @cached_property
    def dissipation(self) -> Lanes:
        """Total taken from the supply. [W]"""
        return np.asarray(self._values["supply.positive"] * self._values["supply.current"])

    @cached_property
    def junction_temperature(self) -> Lanes:
        """Of the laser. [K]"""
        return np.asarray(self._values["D1.junction_temperature"])


OFFERS = tuple(name for name, entry in vars(LaserCurrentFigures).items() if isinstance(entry, cached_property))


def figures(values: Values, evaluation: Evaluation, request: LaserDriverRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LaserCurrentFigures(values, evaluation, request), OFFERS)


def implied(request: LaserDriverRequest) -> tuple[Requirement, ...]:
    """The loop keeps control; the laser stays within the limits of its sheet; a current asked for with limits keeps them."""
    data, current = request.source, request.signal.current
    bounds = [
        Requirement("compliance_margin", "min", 0.0, 0.1),
        Requirement("current", "max", data.current_max, data.current_max),
        Requirement("junction_temperature", "max", junction_limit(request), 10.0),
    ]
    if (request.signal.plane or data.plane) == data.plane:
        bounds.append(Requirement("optical_power", "max", data.power_max, data.power_max))
    if current is not None and current.min is not None:
        bounds.append(Requirement("current", "min", current.min, current.min))
    if current is not None and current.max is not None:
        bounds.append(Requirement("current", "max", current.max, current.max))
    return tuple(bounds)


def propose(request: LaserDriverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Sense voltage and resistor, divider, reference bias, fail-safe resistor, compensation, soft start, filter."""
    return laser_current_sizing.propose(request, derivation, bench)


def stresses(values: Values, request: LaserDriverRequest) -> tuple[Stress, ...]:
    """Worst load of every part, faults in it."""
    return laser_current_loads.stresses(values, request)


def heat(values: Values, request: LaserDriverRequest) -> tuple[Heat, ...]:
    """Laser, pass transistor, op amp."""
    return laser_current_loads.heat(values, request)


def noise_frequency(request: LaserDriverRequest) -> float:
    """Where densities are stated. [Hz]"""
    return NOISE_FREQUENCY


def noise_band(request: LaserDriverRequest) -> tuple[float, float]:
    """Band over which noise is summed. [Hz]"""
    return NOISE_BAND


CIRCUIT = Circuit(
    name="laser-current",
    title="constant-current laser driver, op amp and pass transistor",
    request=LaserDriverRequest,
    topology=topology,
    offers=OFFERS,
    given=given,
    propose=propose,
    bias=bias,
    figures=figures,
    implied=implied,
    stresses=stresses,
    heat=heat,
    faults=laser_current_faults.faults,
    outcome=laser_current_faults.outcome,
    levers=(
        "supply.positive",
        "D1.slope_efficiency",
        "D1.threshold_current",
        "Q1.transconductance",
        "U1.gain_bandwidth",
        "U2.voltage",
        "C1",
    ),
    remarks=laser_current_loads.remarks,
    noise_frequency=noise_frequency,
    noise_band=noise_band,
    not_checked=(
        "layout and supply impedance",
        "electromagnetic compatibility",
        "class of the laser product: for a competent person, by the local rules",
        "inductance of leads and package of the laser",
        "relaxation oscillation and intensity noise of the laser",
        "feedback of light into the laser",
        "temperature of the transistor on its own voltages; base resistance of a bipolar one",
        "saturation of the filter's inductor",
    ),
    formulas=laser_current_sizing.FORMULAS,
    starter=STARTER,
)
